import type { Quantity } from '$lib/quantities';
import { readValue } from './read-value';
import type { Sources } from './sources';
import type { ColumnDefinition, Problem, ReadingRow, Readings, TableDefinition, Worksheet } from './types';

export interface RowState {
	row: ReadingRow;
	/** 1 for the first row */
	number: number;
	/** nothing typed at all */
	blank: boolean;
	/** used, and everything required could be read */
	counts: boolean;
	values: Map<string, Quantity>;
	/** column -> what is wrong with the cell */
	cellProblems: Map<string, string>;
}

export interface ReadState {
	parameters: Map<string, { quantity: Quantity; typed: string }>;
	tables: Map<string, RowState[]>;
	problems: Problem[];
}

/** All typed texts as quantities. What cannot be read becomes a problem with its address; nothing is dropped. */
export function readReadings(worksheet: Worksheet, readings: Readings, sources: Sources): ReadState {
	const problems: Problem[] = [];
	const parameters: ReadState['parameters'] = new Map();
	for (const definition of worksheet.parameters) {
		const typed = textOf(readings.parameters, definition.name);
		const { quantity, problems: found } = readValue(
			typed,
			definition,
			definition.label,
			definition.name,
			sources
		);
		if (quantity) parameters.set(definition.name, { quantity, typed });
		for (const problem of found) problems.push({ ...problem, parameter: definition.name });
	}
	const tables = new Map<string, RowState[]>();
	for (const table of worksheet.tables) {
		const rows = Object.hasOwn(readings.tables, table.name) ? (readings.tables[table.name] ?? []) : [];
		tables.set(
			table.name,
			rows.map((row, i) => readRow(table, row, i + 1, sources, problems))
		);
	}
	problems.push(...unknownNames(worksheet, readings));
	return { parameters, tables, problems };
}

function readRow(
	table: TableDefinition,
	row: ReadingRow,
	number: number,
	sources: Sources,
	problems: Problem[]
): RowState {
	const typedColumns = table.columns.filter((column) => column.formula === null);
	const blank = typedColumns.every((column) => textOf(row.cells, column.name).trim() === '');
	const state: RowState = { row, number, blank, counts: false, values: new Map(), cellProblems: new Map() };
	if (row.status !== 'used' && (row.reason ?? '').trim() === '') {
		const message = `Row ${number} is ${row.status} without a reason. Write one.`;
		problems.push({ severity: 'warning', code: 'reason-missing', message, table: table.name, row: row.id });
	}
	if (blank) return state;
	let complete = true;
	for (const column of typedColumns) {
		const found = readCell(table, column, row, number, sources);
		if (found.quantity) state.values.set(column.name, found.quantity);
		const missing = column.required && (column.kind === 'number' ? found.quantity === null : found.empty);
		if (missing) complete = false;
		const cellProblems = [...found.problems];
		if (missing && found.empty && row.status === 'used') {
			const message = `Row ${number}, ${column.name}: nothing typed. The row stays out of the workings.`;
			cellProblems.push({ severity: 'warning', code: 'cell-missing', message });
		}
		const [first] = cellProblems;
		if (first) state.cellProblems.set(column.name, first.message);
		for (const problem of cellProblems)
			problems.push({ ...problem, table: table.name, row: row.id, column: column.name });
	}
	state.counts = complete && row.status === 'used';
	return state;
}

function readCell(
	table: TableDefinition,
	column: ColumnDefinition,
	row: ReadingRow,
	number: number,
	sources: Sources
): ReturnType<typeof readValue> {
	const typed = textOf(row.cells, column.name);
	const address = `Row ${number}, ${column.name}`;
	if (column.kind === 'number')
		return readValue(typed, column, address, `${table.name}.${column.name}`, sources);
	const text = typed.trim();
	if (column.kind === 'choice' && text !== '' && !column.choices.includes(text)) {
		const message = `${address}: "${text}" is none of ${column.choices.join(', ')}. Kept as typed.`;
		return { quantity: null, empty: false, problems: [{ severity: 'error', code: 'not-a-choice', message }] };
	}
	return { quantity: null, empty: text === '', problems: [] };
}

function unknownNames(worksheet: Worksheet, readings: Readings): Problem[] {
	const problems: Problem[] = [];
	const known = new Set(worksheet.parameters.map(({ name }) => name));
	for (const parameter of Object.keys(readings.parameters)) {
		if (known.has(parameter)) continue;
		const message = `"${parameter}" is not read in this experiment. Kept, not used.`;
		problems.push({ severity: 'warning', code: 'unknown-parameter', message, parameter });
	}
	for (const [name, rows] of Object.entries(readings.tables)) {
		const table = worksheet.tables.find((candidate) => candidate.name === name);
		if (!table) {
			problems.push({
				severity: 'warning',
				code: 'unknown-table',
				message: `The table "${name}" is not in this experiment. Kept, not used.`,
				table: name
			});
			continue;
		}
		const columns = new Set(table.columns.map((column) => column.name));
		const extra = new Set(
			rows.flatMap((row) => Object.keys(row.cells)).filter((column) => !columns.has(column))
		);
		for (const column of extra) {
			const message = `The column "${column}" is not in this table. Kept, not used.`;
			problems.push({ severity: 'warning', code: 'unknown-column', message, table: name, column });
		}
	}
	return problems;
}

function textOf(texts: Record<string, string>, name: string): string {
	return Object.hasOwn(texts, name) ? (texts[name] ?? '') : '';
}
