import { readTable, type Problem, type TableReading } from '$lib/worksheets';
import { authorise, type Act } from '../auth';
import { database } from '../db';
import { notFound, Refusal } from '../errors';
import * as experiments from '../experiments';
import * as files from '../files';
import { countRecords, fileRows, largestFile, liveRows, longestCell } from './live-limits';
import { workRow } from './work-row';

export interface TakenFile {
	/** null: read, but not stored; `note` says so */
	file: { id: string; name: string; size: number } | null;
	note: string;
	table: TableReading;
}

/**
 * A file of readings for one table: kept as it came, and read for a preview. Nothing goes into the readings yet; whoever
 * uploaded it looks first. Errors: Refusal 'too-large', 'unprocessable', and the permission's own.
 */
export async function takeFile(
	act: Act,
	input: { work: string; table: string; name: string; body: ReadableStream<Uint8Array> | null }
): Promise<TakenFile> {
	const db = database();
	await authorise(db, act.viewer, 'work.write', input.work);
	const { assignmentId } = await workRow(db, input.work);
	const worksheet = await experiments.worksheetOf(db, assignmentId);
	const definition = worksheet.tables.find((table) => table.name === input.table);
	if (!definition) throw notFound();

	const bytes = await files.receiveBody(input.body, largestFile);
	const { text, encoding } = await files.sniffText(bytes);
	const records = countRecords(text);
	// One record more may be the header.
	if (records > fileRows + 1) {
		throw new Refusal(
			'too-large',
			`The file has about ${records.toLocaleString('en')} rows; ${fileRows.toLocaleString('en')} is the most. Thin it out or split it.`
		);
	}
	const kept = await keep(act, input, bytes);
	const table = records > liveRows + 1 ? tooLongToType(records) : readTable(text, definition.columns);
	if (encoding === 'windows-1252') table.problems.unshift(guessedEncoding);
	return { file: kept.file, note: kept.note, table: withinLimits(table) };
}

async function keep(
	act: Act,
	input: { work: string; name: string },
	bytes: Uint8Array
): Promise<{ file: TakenFile['file']; note: string }> {
	try {
		const { id, name, size } = await files.keepFile(act, {
			subject: { kind: 'work', id: input.work },
			name: input.name,
			bytes,
			mediaType: 'text/csv'
		});
		return { file: { id, name, size }, note: `${name} is stored as it came.` };
	} catch (problem) {
		if (!(problem instanceof Refusal) || problem.kind !== 'unavailable') throw problem;
		return { file: null, note: 'Text read; file not stored. Try it again later.' };
	}
}

const guessedEncoding: Problem = {
	severity: 'warning',
	code: 'encoding-guessed',
	message: 'The text is not UTF-8 and was read as Windows-1252. Look at signs such as µ and °.'
};

/** A table of this length is a recording: it is kept as a file and not typed into the live table. */
function tooLongToType(records: number): TableReading {
	return {
		rows: [],
		problems: [
			{
				severity: 'error',
				code: 'too-long-for-live',
				message: `${records.toLocaleString('en')} rows. A table takes ${liveRows.toLocaleString('en')}; the file is kept, and none of it goes into the table. Thin it out to the rows you need, then upload that.`
			}
		],
		columns: [],
		delimiter: '',
		rowCount: records
	};
}

function withinLimits(table: TableReading): TableReading {
	const long = table.rows.findIndex((row) =>
		Object.values(row.cells).some((text) => text.length > longestCell)
	);
	if (long === -1) return table;
	const problem: Problem = {
		severity: 'error',
		code: 'cell-too-long',
		message: `Row ${long + 1} has a cell of more than ${longestCell.toLocaleString('en')} characters. Nothing was taken: look whether a quotation mark is missing.`,
		row: String(long + 1)
	};
	return { ...table, rows: [], problems: [problem, ...table.problems] };
}
