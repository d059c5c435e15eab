/**
 * Text that a spreadsheet would take for a formula gets an apostrophe in front, which spreadsheets show as text. Only for
 * text: numbers are written by this software and keep their minus.
 */
export function guardedText(text: string): string {
	return /^[=+\-@\t\r\n]/u.test(text) ? `'${text}` : text;
}

const quoted = (cell: string) => (/[",\r\n]/u.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell);

/** A line's cells: texts are guarded, numbers written with a point, null is empty. */
export type CsvCell = string | number | null;

const written = (cell: CsvCell): string =>
	cell === null ? '' : quoted(typeof cell === 'number' ? String(cell) : guardedText(cell));

/**
 * RFC 4180: CRLF, quotes doubled. Begins with a byte order mark, without which spreadsheets on some systems misread
 * names that are not ASCII; readers of UTF-8 skip it.
 */
export function csvText(lines: readonly (readonly CsvCell[])[]): string {
	return `\uFEFF${lines.map((line) => line.map(written).join(',')).join('\r\n')}\r\n`;
}
