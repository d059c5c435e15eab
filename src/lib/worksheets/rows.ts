import type { Quantity } from '$lib/quantities';
import { readValue } from './read-value';
import type { Sources, Standing } from './sources';
import type {
	ColumnDefinition,
	Problem,
	ReadingRow,
	Readings,
	ShownRow,
	TableDefinition,
	Worksheet
} from './types';

/** One row at work: what was read, and what has been computed from it so far. */
export interface RowState {
	row: ReadingRow;
	table: string;
	/** 1 for the first row */
	number: number;
	/** nothing typed at all */
	blank: boolean;
	/** everything required could be read, and the row it belongs to is there */
	complete: boolean;
	/** number columns, typed and computed */
	values: Map<string, Quantity>;
	/** table -> the row of it that this one belongs to */
	parents: Map<string, RowState>;
	/** columns of its own readings that could not be computed */
	failed: Set<string>;
	/** column -> what is wrong with the cell */
	cellProblems: Map<string, string>;
	/** what reading it found */
	problems: Problem[];
	/** its key stands in a row above */
	twice: boolean;
	/** columns that its table does not have */
	unknown: string[];
	/** what was drawn of it last, for as long as nothing in it changes */
	shown: ShownRow | null;
}

/** Whether a row enters what is computed over rows: used, readable, and belonging to a row in use. */
export function inUse(state: RowState): boolean {
	if (!state.complete || state.row.status !== 'used' || state.failed.size > 0) return false;
	for (const parent of state.parents.values()) if (!inUse(parent)) return false;
	return true;
}

/** The row of `table` that a row is or belongs to; undefined where there is none. */
export function ancestorIn(state: RowState, table: string): RowState | undefined {
	if (state.table === table) return state;
	const parent = state.parents.get(table);
	if (parent) return parent;
	for (const between of state.parents.values()) {
		const found = ancestorIn(between, table);
		if (found) return found;
	}
	return undefined;
}

export function textOf(texts: Record<string, string>, name: string): string {
	return Object.hasOwn(texts, name) ? (texts[name] ?? '') : '';
}

/** The rows of a table: those given by the experiment, or those that were read. */
export function rowsOf({ name, fixed, key }: TableDefinition, readings: Readings): ReadingRow[] {
	if (fixed) return fixed.map((cells) => ({ id: textOf(cells, key ?? ''), cells, status: 'used' as const }));
	return Object.hasOwn(readings.tables, name) ? (readings.tables[name] ?? []) : [];
}

export interface RowPlace {
	number: number;
	/** parent table -> its row by key */
	parents: ReadonlyMap<string, ReadonlyMap<string, RowState>>;
	/** whether other tables' rows belong to this table's */
	isParent: boolean;
	/** its key stands in a row above */
	twice: boolean;
}

export function newRow(table: string, row: ReadingRow): RowState {
	return {
		row,
		table,
		number: 0,
		blank: true,
		complete: false,
		values: new Map(),
		parents: new Map(),
		failed: new Set(),
		cellProblems: new Map(),
		problems: [],
		unknown: [],
		twice: false,
		shown: null
	};
}

/**
 * Reads all typed texts of `state.row` as quantities, in place: whoever holds the row holds it still. What cannot be read
 * becomes a problem with its address; nothing is dropped.
 */
export function readRow(state: RowState, table: TableDefinition, place: RowPlace, sources: Sources): void {
	const { row } = state;
	const typed = table.columns.filter((column) => column.formula === null);
	state.number = place.number;
	state.twice = place.twice;
	state.blank = typed.every((column) => textOf(row.cells, column.name).trim() === '');
	state.complete = false;
	state.values.clear();
	state.parents.clear();
	state.failed.clear();
	state.cellProblems.clear();
	state.problems = [];
	state.unknown = Object.keys(row.cells).filter(
		(name) => !table.columns.some((column) => column.name === name)
	);
	const at = { table: table.name, row: row.id };
	if (row.status !== 'used' && (row.reason ?? '').trim() === '') {
		const message = `Row ${state.number} is ${row.status} without a reason. Write one.`;
		state.problems.push({ severity: 'warning', code: 'reason-missing', message, ...at });
	}
	if (state.blank) return;
	for (const { of, name } of typed) {
		const parent = of === null ? undefined : place.parents.get(of)?.get(textOf(row.cells, name).trim());
		if (of !== null && parent) state.parents.set(of, parent);
	}
	const [parent] = state.parents.values();
	const run = place.isParent ? row.id : (parent?.row.id ?? '');
	let complete = true;
	for (const column of typed) {
		const standing: Standing = {
			place: `${table.name}.${column.name}`,
			run,
			anew: place.isParent ? 'run' : 'reading'
		};
		const found = readCell(column, row, state.number, standing, sources);
		if (found.quantity) state.values.set(column.name, found.quantity);
		const missing = column.required && (column.kind === 'number' ? found.quantity === null : found.empty);
		const problems = [...found.problems, ...doubts(state, table, column, found.empty, missing, place)];
		if (missing || problems.some(({ code }) => code === 'no-such-row' || code === 'key-twice'))
			complete = false;
		const [first] = problems;
		if (first) state.cellProblems.set(column.name, first.message);
		for (const problem of problems) state.problems.push({ ...problem, ...at, column: column.name });
	}
	state.complete = complete;
}

/** What is wrong with a cell beyond its number: nothing there, a row that is not there, a key that stands twice. */
function doubts(
	{ row, number, parents }: RowState,
	table: TableDefinition,
	column: ColumnDefinition,
	empty: boolean,
	missing: boolean,
	place: RowPlace
): Pick<Problem, 'severity' | 'code' | 'message'>[] {
	const address = `Row ${number}, ${column.name}`;
	if (empty) {
		if (!missing || row.status !== 'used') return [];
		const message = `${address}: nothing typed. The row stays out of the workings.`;
		return [{ severity: 'warning', code: 'cell-missing', message }];
	}
	const text = textOf(row.cells, column.name).trim();
	if (column.of !== null && !parents.has(column.of)) {
		const message = `${address}: "${text}" is not in the table ${column.of}. Add it there, or look at the spelling.`;
		return [{ severity: 'error', code: 'no-such-row', message }];
	}
	if (column.name === table.key && place.twice) {
		const message = `${address}: "${text}" stands in an earlier row. Give this one another name.`;
		return [{ severity: 'error', code: 'key-twice', message }];
	}
	return [];
}

function readCell(
	column: ColumnDefinition,
	row: ReadingRow,
	number: number,
	standing: Standing,
	sources: Sources
): ReturnType<typeof readValue> {
	const typed = textOf(row.cells, column.name);
	const address = `Row ${number}, ${column.name}`;
	if (column.kind === 'number') return readValue(typed, column, address, standing, sources);
	const text = typed.trim();
	if (column.kind === 'choice' && text !== '' && !column.choices.includes(text)) {
		const message = `${address}: "${text}" is none of ${column.choices.join(', ')}. Kept as typed.`;
		return { quantity: null, empty: false, problems: [{ severity: 'error', code: 'not-a-choice', message }] };
	}
	return { quantity: null, empty: text === '', problems: [] };
}

/** Names in the readings that the experiment does not have. */
export function unknownNames(
	worksheet: Worksheet,
	readings: Readings,
	unknownColumns: readonly { table: string; column: string }[]
): Problem[] {
	const problems: Problem[] = [];
	const known = new Set(worksheet.parameters.map(({ name }) => name));
	for (const parameter of Object.keys(readings.parameters)) {
		if (known.has(parameter)) continue;
		const message = `"${parameter}" is not read in this experiment. Kept, not used.`;
		problems.push({ severity: 'warning', code: 'unknown-parameter', message, parameter });
	}
	for (const table of Object.keys(readings.tables)) {
		if (worksheet.tables.some(({ name }) => name === table)) continue;
		const message = `The table "${table}" is not in this experiment. Kept, not used.`;
		problems.push({ severity: 'warning', code: 'unknown-table', message, table });
	}
	for (const { table, column } of unknownColumns) {
		const message = `The column "${column}" is not in this table. Kept, not used.`;
		problems.push({ severity: 'warning', code: 'unknown-column', message, table, column });
	}
	return problems;
}
