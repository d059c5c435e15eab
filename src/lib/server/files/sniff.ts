import { fileTypeFromBuffer } from 'file-type';
import { unprocessable } from '../errors';

export interface SniffedText {
	text: string;
	/** what the bytes are written in */
	encoding: 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252';
}

const spreadsheets = new Set(['xlsx', 'xls', 'ods', 'cfb', 'numbers']);

/**
 * Reads bytes as a text table, whatever name and type came with them. UTF-8 and UTF-16 are recognised exactly; text that is
 * neither can only be an older single-byte one, read as windows-1252, and the caller says so.
 * Errors: Refusal 'unprocessable' for anything that is not text.
 */
export async function sniffText(bytes: Uint8Array): Promise<SniffedText> {
	const utf16 =
		bytes[0] === 0xff && bytes[1] === 0xfe
			? 'utf-16le'
			: bytes[0] === 0xfe && bytes[1] === 0xff
				? 'utf-16be'
				: null;
	if (utf16) return { text: new TextDecoder(utf16).decode(bytes), encoding: utf16 };
	const kind = await fileTypeFromBuffer(bytes);
	if (kind && !kind.mime.startsWith('text/')) {
		throw unprocessable(
			spreadsheets.has(kind.ext)
				? 'This is a spreadsheet file. Save it there as CSV, then upload that; or copy the cells and paste them.'
				: `This is a file of kind ${kind.ext}, not a table. Wanted: text with columns divided by commas, semicolons or tabs.`
		);
	}
	if (bytes.includes(0)) {
		throw unprocessable(
			'This is not text. Wanted: a table as text, columns divided by commas, semicolons or tabs.'
		);
	}
	try {
		return { text: new TextDecoder('utf-8', { fatal: true }).decode(bytes), encoding: 'utf-8' };
	} catch {
		return { text: new TextDecoder('windows-1252').decode(bytes), encoding: 'windows-1252' };
	}
}
