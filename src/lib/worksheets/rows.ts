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
	/** table -> the row of it that this one belongs to; rows of one family may share it */
	parents: ReadonlyMap<string, RowState>;
	/** columns of its own readings that could not be computed; null for none, as in most rows */
	failed: Set<string> | null;
	/** column -> what is wrong with the cell */
	cellProblems: Map<string, string> | null;
	/** what reading it found */
	problems: Problem[] | null;
	/** its key stands in a row above */
	twice: boolean;
	/** columns that its table does not have */
	unknown: string[] | null;
	/** what was drawn of it last, for as long as nothing in it changes */
	shown: ShownRow | null;
}

/** Whether a row enters what is computed over rows: used, readable, and belonging to a row in use. */
export function inUse(state: RowState): boolean {
	if (!state.complete || state.row.status !== 'used' || (state.failed?.size ?? 0) > 0) return false;
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
	/** maps of one parent, by it */
	shared: Map<RowState, ReadonlyMap<string, RowState>>;
}

const noParents: ReadonlyMap<string, RowState> = new Map();

export function newRow(table: string, row: ReadingRow): RowState {
	return {
		row,
		table,
		number: 0,
		blank: true,
		complete: false,
		values: new Map(),
		parents: noParents,
		failed: null,
		cellProblems: null,
		problems: null,
		unknown: null,
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
	const { typed, names } = planOf(table);
	state.number = place.number;
	state.twice = place.twice;
	state.blank = typed.every(({ column }) => textOf(row.cells, column.name).trim() === '');
	state.complete = false;
	state.values.clear();
	state.parents = noParents;
	state.failed = null;
	state.cellProblems = null;
	state.problems = null;
	state.unknown = null;
	for (const name in row.cells) if (!names.has(name)) (state.unknown ??= []).push(name);
	if (row.status !== 'used' && (row.reason ?? '').trim() === '') {
		const message = `Row ${state.number} is ${row.status} without a reason. Write one.`;
		tell(state, { severity: 'warning', code: 'reason-missing', message });
	}
	if (state.blank) return;
	state.parents = parentsOf(state, typed, place);
	const [parent] = state.parents.values();
	const run = place.isParent ? row.id : (parent?.row.id ?? '');
	const anew = place.isParent ? 'run' : 'reading';
	let complete = true;
	for (const { column, at } of typed) {
		const found = readCell(column, row, state.number, { place: at, run, anew }, sources);
		if (found.quantity) state.values.set(column.name, found.quantity);
		const missing = column.required && (column.kind === 'number' ? found.quantity === null : found.empty);
		for (const problem of found.problems) tell(state, problem, column.name);
		const doubt = doubtAbout(state, table, column, found.empty, missing, place);
		if (doubt) tell(state, doubt, column.name);
		if (missing || doubt?.code === 'no-such-row' || doubt?.code === 'key-twice') complete = false;
	}
	state.complete = complete;
}

interface Plan {
	typed: { column: ColumnDefinition; /** 'readings.p' */ at: string }[];
	names: Set<string>;
}

const plans = new WeakMap<TableDefinition, Plan>();

function planOf(table: TableDefinition): Plan {
	let plan = plans.get(table);
	if (!plan) {
		const typed = table.columns.filter((column) => column.formula === null);
		plan = {
			typed: typed.map((column) => ({ column, at: `${table.name}.${column.name}` })),
			names: new Set(table.columns.map(({ name }) => name))
		};
		plans.set(table, plan);
	}
	return plan;
}

function tell(
	state: RowState,
	problem: Pick<Problem, 'severity' | 'code' | 'message'>,
	column?: string
): void {
	const place = { table: state.table, row: state.row.id };
	(state.problems ??= []).push({ ...problem, ...place, ...(column === undefined ? {} : { column }) });
	if (column === undefined || state.cellProblems?.has(column) === true) return;
	(state.cellProblems ??= new Map()).set(column, problem.message);
}

/** Rows that belong to one parent alone share one map of it. */
function parentsOf(
	{ row }: RowState,
	typed: Plan['typed'],
	{ parents, shared }: RowPlace
): ReadonlyMap<string, RowState> {
	let found: Map<string, RowState> | null = null;
	let only: RowState | null = null;
	for (const { column } of typed) {
		if (column.of === null) continue;
		const parent = parents.get(column.of)?.get(textOf(row.cells, column.name).trim());
		if (!parent) continue;
		if (only === null && found === null) {
			only = parent;
			continue;
		}
		found ??= only ? new Map([[only.table, only]]) : new Map<string, RowState>();
		found.set(column.of, parent);
	}
	if (found) return found;
	if (!only) return noParents;
	let map = shared.get(only);
	if (!map) shared.set(only, (map = new Map([[only.table, only]])));
	return map;
}

/** What is wrong with a cell beyond its number: nothing there, a row that is not there, a key that stands twice. */
function doubtAbout(
	{ row, number, parents }: RowState,
	table: TableDefinition,
	column: ColumnDefinition,
	empty: boolean,
	missing: boolean,
	place: RowPlace
): Pick<Problem, 'severity' | 'code' | 'message'> | null {
	const address = `Row ${number}, ${column.name}`;
	if (empty) {
		if (!missing || row.status !== 'used') return null;
		const message = `${address}: nothing typed. The row stays out of the workings.`;
		return { severity: 'warning', code: 'cell-missing', message };
	}
	const text = textOf(row.cells, column.name).trim();
	if (column.of !== null && !parents.has(column.of)) {
		const message = `${address}: "${text}" is not in the table ${column.of}. Add it there, or look at the spelling.`;
		return { severity: 'error', code: 'no-such-row', message };
	}
	if (column.name === table.key && place.twice) {
		const message = `${address}: "${text}" stands in an earlier row. Give this one another name.`;
		return { severity: 'error', code: 'key-twice', message };
	}
	return null;
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
