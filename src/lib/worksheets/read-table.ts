import { parseTypedNumber, parseUnit, placeOfFirstDigit, unitText, type Unit } from '$lib/quantities';
import { findDelimiter, splitDelimited, type DelimitedText } from './delimited';
import { looksLikeHeader, readHeader, type HeaderField } from './read-header';
import type { ColumnDefinition, Problem, TableReading } from './types';

/** Rows that one table takes from a file. */
export const rowLimit = 50_000;

/**
 * Reads pasted or uploaded text (comma, semicolon, tab; decimal point or comma; byte-order mark; quotes) against a
 * table's columns. Cells stay text, exactly as they stood, unless the header's unit asks for a conversion. What is
 * not taken is said; a bad cell is kept with its problem; nothing is dropped or coerced.
 */
export function readTable(text: string, columns: ColumnDefinition[]): TableReading {
	const plain = text.replace(/^\uFEFF/, '');
	const delimiter = findDelimiter(plain);
	const { records, unclosedQuote } = splitDelimited(plain, delimiter);
	const problems: Problem[] = [];
	if (unclosedQuote !== null) {
		const message = `Line ${unclosedQuote}: a quotation mark is opened and never closed. Everything after it is one cell.`;
		problems.push({ severity: 'error', code: 'unclosed-quote', message });
	}
	const [first, ...rest] = records;
	if (!first) return { rows: [], problems: [...problems, nothing()], columns: [], delimiter, rowCount: 0 };
	const headed = looksLikeHeader(first.fields, columns);
	const body = (headed ? rest : records).filter(({ fields }) => fields.some((field) => field.trim() !== ''));
	const header = headed ? readHeader(first.fields, columns) : inOrder(columns, body, problems);
	for (const { problem } of header) if (problem) problems.push(problem);
	const described = header.map(({ header: name, column, unit, note }) => ({
		header: name,
		column: column?.name ?? null,
		unit,
		note
	}));
	if (body.length > rowLimit) {
		const message = `${body.length.toLocaleString('en')} rows, and a table takes ${rowLimit.toLocaleString('en')}. Nothing was taken: split the file or thin it out.`;
		problems.push({ severity: 'error', code: 'too-many-rows', message });
		return { rows: [], problems, columns: described, delimiter, rowCount: body.length };
	}
	if (body.length === 0) problems.push(nothing());
	const rows = body.map(({ fields, line }, i) => ({
		cells: readCells(fields, header, columns, i + 1, line, problems)
	}));
	return { rows, problems, columns: described, delimiter, rowCount: body.length };
}

function nothing(): Problem {
	return { severity: 'warning', code: 'no-rows', message: 'No rows in it.' };
}

/** Without a header the columns are taken in their own order, and that is said. */
function inOrder(
	columns: readonly ColumnDefinition[],
	body: DelimitedText['records'],
	problems: Problem[]
): HeaderField[] {
	const read = columns.filter((column) => column.formula === null);
	const width = Math.max(0, ...body.slice(0, 1000).map(({ fields }) => fields.length));
	const taken = read.slice(0, width);
	const names = taken.map((column) =>
		column.kind === 'number' ? `${column.name} in ${unitText(parseUnit(column.unit))}` : column.name
	);
	problems.push({
		severity: 'note',
		code: 'no-header',
		message: `No header, so the columns are taken in order: ${names.join(', ')}.`
	});
	const split = body
		.slice(0, 1000)
		.every(({ fields }) => fields.length === 2 && fields.every((field) => /^[+-]?\d+$/.test(field.trim())));
	if (split && body.length > 0) {
		const message =
			'Each row is two whole numbers with a comma between. If that comma is a decimal sign, separate columns by semicolons or add a header.';
		problems.push({ severity: 'warning', code: 'comma-unclear', message });
	}
	return taken.map((column) => ({
		header: column.name,
		column,
		convertFrom: null,
		unit: null,
		note: null,
		problem: null
	}));
}

function readCells(
	fields: readonly string[],
	header: readonly HeaderField[],
	columns: readonly ColumnDefinition[],
	row: number,
	line: number,
	problems: Problem[]
): Record<string, string> {
	const cells: Record<string, string> = {};
	for (const column of columns) if (column.formula === null) cells[column.name] = '';
	header.forEach(({ column, convertFrom }, i) => {
		const text = fields[i] ?? '';
		if (!column) return;
		cells[column.name] = convertFrom ? convert(text, convertFrom, column) : text.trim();
		if (column.kind !== 'number') return;
		const reading = parseTypedNumber(text);
		if (reading.kind !== 'problem') return;
		const message = `Row ${row}, ${column.name}: ${reading.message} Kept as typed.`;
		problems.push({ severity: 'error', code: reading.code, message, row: String(row), column: column.name });
	});
	const beyond = fields.slice(header.length).filter((field) => field.trim() !== '');
	if (beyond.length > 0) {
		const message = `Row ${row} (line ${line}) has more cells than there are columns. Not taken: ${beyond.map((field) => `"${field.trim()}"`).join(', ')}.`;
		problems.push({ severity: 'warning', code: 'cells-beyond', message, row: String(row) });
	}
	return cells;
}

/**
 * A plain number in the column's unit, with two digits more than the typed resolution carries over. Anything else
 * keeps its text with its own unit behind it, so that it shows up as a problem and not as a wrong number.
 */
function convert(text: string, from: Unit, column: ColumnDefinition): string {
	const reading = parseTypedNumber(text);
	if (reading.kind === 'empty') return '';
	if (
		reading.kind === 'problem' ||
		reading.number.standardUncertainty !== null ||
		reading.number.plusMinus !== null
	) {
		return `${text.trim()} ${unitText(from)}`;
	}
	const to = parseUnit(column.unit);
	const { value, decimals } = reading.number;
	const converted = (value * from.factor + from.offset - to.offset) / to.factor;
	const step = (Number(`1e-${decimals}`) * from.factor) / to.factor;
	const sameScale = from.factor === to.factor;
	const places = sameScale ? Math.max(decimals, offsetDecimals(from, to)) : 2 - placeOfFirstDigit(step);
	return converted.toFixed(Math.min(20, Math.max(0, places)));
}

/** Decimals that a shift of the scale's zero needs: two for 273.15. */
function offsetDecimals(from: Unit, to: Unit): number {
	const text = String(Math.abs(from.offset - to.offset));
	return text.includes('.') ? text.length - text.indexOf('.') - 1 : 0;
}
