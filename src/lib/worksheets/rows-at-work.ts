import { ancestorsOf } from './relations';
import { ancestorIn, newRow, readRow, rowsOf, textOf, type RowPlace, type RowState } from './rows';
import type { Sources } from './sources';
import type { ReadingRow, Readings, TableDefinition, Worksheet } from './types';

/**
 * The rows of all tables, who belongs to whom, and what changed since the last pass. Rows are kept from pass to pass
 * and read again in place, so that an edit costs what it touches.
 */
export class Rows {
	readonly tables = new Map<string, RowState[]>();
	/** rows in which something was read or computed anew in this pass */
	readonly changed = new Map<string, Set<RowState>>();
	/** tables in which rows came, went or moved in this pass */
	readonly reshaped = new Set<string>();
	/** rows with columns that their table does not have */
	private readonly unknown = new Set<RowState>();
	private readonly ancestors: ReadonlyMap<string, readonly string[]>;
	private readonly parentFirst: readonly TableDefinition[];
	private readonly parentTables: ReadonlySet<string>;
	/** table -> its rows by key */
	private readonly keyed = new Map<string, ReadonlyMap<string, RowState>>();
	/** "table ancestor" -> its rows for each row of the ancestor */
	private readonly families = new Map<string, Map<RowState, RowState[]>>();

	constructor(worksheet: Worksheet) {
		const ancestors = ancestorsOf(worksheet.tables);
		if ('cycle' in ancestors) throw new Error(`Tables belong to each other: ${ancestors.cycle.join(', ')}`);
		this.ancestors = ancestors;
		this.parentFirst = [...worksheet.tables].sort(
			(a, b) => (ancestors.get(a.name)?.length ?? 0) - (ancestors.get(b.name)?.length ?? 0)
		);
		this.parentTables = new Set(
			worksheet.tables.flatMap(({ columns }) => columns.flatMap(({ of }) => of ?? []))
		);
		for (const { name } of worksheet.tables) this.tables.set(name, []);
	}

	ancestorsOf(table: string): readonly string[] {
		return this.ancestors.get(table) ?? [];
	}

	isParent(table: string): boolean {
		return this.parentTables.has(table);
	}

	mark(row: RowState): void {
		row.shown = null;
		const set = this.changed.get(row.table);
		if (set) set.add(row);
		else this.changed.set(row.table, new Set([row]));
	}

	changedIn(table: string): ReadonlySet<RowState> {
		return this.changed.get(table) ?? none;
	}

	/** Takes over what is there now; afterwards `changed` and `reshaped` say what that touched. */
	read(readings: Readings, sources: Sources): void {
		this.changed.clear();
		this.reshaped.clear();
		const keys = new Map<string, ReadonlyMap<string, RowState>>();
		for (const table of this.parentFirst) {
			this.readTable(table, rowsOf(table, readings), keys, sources);
			if (table.key !== null) keys.set(table.name, this.byKey(table, table.key));
		}
	}

	private readTable(
		table: TableDefinition,
		rows: readonly ReadingRow[],
		keys: ReadonlyMap<string, ReadonlyMap<string, RowState>>,
		sources: Sources
	): void {
		const before = this.tables.get(table.name) ?? [];
		const left = new Map<string, RowState>();
		// the usual pass changes no row's place: only where it does are rows looked up by id
		const inPlace = before.length === rows.length && rows.every((row, i) => before[i]?.row.id === row.id);
		if (!inPlace) for (const state of before) left.set(state.row.id, state);
		if (inPlace && this.isQuiet(table)) {
			// nothing came, went, or changed its key: only rows that are other objects than before need a look
			const changed = rows.flatMap((row, i) => (before[i]?.row === row ? [] : [i]));
			if (changed.length === 0) return;
			if (table.key === null) {
				for (const i of changed) this.readAgain(table, before, rows, i, keys, sources);
				return;
			}
		}
		const keysBefore = new Set<string>();
		const isParent = this.isParent(table.name);
		const shared = new Map<RowState, ReadonlyMap<string, RowState>>();
		const after = rows.map((row, i) => {
			const known = inPlace ? before[i] : left.get(row.id);
			if (known && !inPlace) left.delete(row.id);
			const state = known ?? newRow(table.name, row);
			const key = table.key === null ? '' : textOf(row.cells, table.key).trim();
			const twice = key !== '' && keysBefore.has(key);
			const same =
				known !== undefined && known.number === i + 1 && known.twice === twice && sameRow(known.row, row);
			state.row = row;
			if (!same || this.parentChanged(table, state, keys)) {
				this.readInto(state, table, { number: i + 1, parents: keys, isParent, twice, shared }, sources);
			}
			keysBefore.add(key);
			return state;
		});
		if (inPlace) return;
		this.reshaped.add(table.name);
		for (const gone of left.values()) {
			this.unknown.delete(gone);
			for (const parent of gone.parents.values()) this.mark(parent);
		}
		this.tables.set(table.name, after);
		this.forgetFamilies(table.name);
	}

	/** Whether the rows that a table's belong to are as they were. */
	private isQuiet(table: TableDefinition): boolean {
		return table.columns.every(
			({ of }) => of === null || (this.changedIn(of).size === 0 && !this.reshaped.has(of))
		);
	}

	private readAgain(
		table: TableDefinition,
		states: readonly RowState[],
		rows: readonly ReadingRow[],
		i: number,
		keys: ReadonlyMap<string, ReadonlyMap<string, RowState>>,
		sources: Sources
	): void {
		const [state, row] = [states[i], rows[i]];
		if (!state || !row) return;
		const same = sameRow(state.row, row);
		state.row = row;
		if (same) return;
		const place = {
			number: i + 1,
			parents: keys,
			isParent: this.isParent(table.name),
			twice: false,
			shared: new Map()
		};
		this.readInto(state, table, place, sources);
	}

	private readInto(state: RowState, table: TableDefinition, place: RowPlace, sources: Sources): void {
		const parents = [...state.parents.values()];
		readRow(state, table, place, sources);
		this.follow(table.name, state, parents);
		this.mark(state);
		if (state.unknown) this.unknown.add(state);
		else this.unknown.delete(state);
	}

	/** A row that went elsewhere is missed where it was. */
	private follow(table: string, state: RowState, before: readonly RowState[]): void {
		const after = [...state.parents.values()];
		if (after.length === before.length && after.every((parent, i) => parent === before[i])) return;
		this.forgetFamilies(table);
		for (const parent of before) if (!after.includes(parent)) this.mark(parent);
	}

	private forgetFamilies(table: string): void {
		for (const pair of this.families.keys()) if (pair.startsWith(`${table} `)) this.families.delete(pair);
	}

	/** Whether the row belongs to another row than before, or to one that was itself read anew. */
	private parentChanged(
		table: TableDefinition,
		state: RowState,
		keys: ReadonlyMap<string, ReadonlyMap<string, RowState>>
	): boolean {
		return table.columns.some(({ of, name }) => {
			if (of === null) return false;
			const parent = keys.get(of)?.get(textOf(state.row.cells, name).trim());
			return parent !== state.parents.get(of) || (parent !== undefined && this.changedIn(of).has(parent));
		});
	}

	private byKey({ name }: TableDefinition, key: string): ReadonlyMap<string, RowState> {
		const known = this.keyed.get(name);
		if (known && this.changedIn(name).size === 0 && !this.reshaped.has(name)) return known;
		const rows = new Map<string, RowState>();
		for (const state of this.tables.get(name) ?? []) {
			const text = textOf(state.row.cells, key).trim();
			if (text !== '' && !rows.has(text)) rows.set(text, state);
		}
		this.keyed.set(name, rows);
		return rows;
	}

	/** Columns that stand in rows and not in their table, each once. */
	unknownColumns(): { table: string; column: string }[] {
		const found = new Map<string, { table: string; column: string }>();
		for (const { table, unknown } of this.unknown)
			for (const column of unknown ?? []) found.set(`${table} ${column}`, { table, column });
		return [...found.values()];
	}

	/** Whose rows of `table` are meant at a row: that row itself, its parent for rows of its own kind, or all (null). */
	familyHead(table: string, context: RowState | null): RowState | null {
		if (!context) return null;
		if (table === context.table) {
			const [parent] = context.parents.values();
			return parent ?? null;
		}
		return this.ancestorsOf(table).includes(context.table) ? context : null;
	}

	/** The rows of `table` that belong to `head`, in order; all of them where there is none. */
	familyOf(table: string, head: RowState | null): readonly RowState[] {
		const all = this.tables.get(table) ?? [];
		if (!head) return all;
		const pair = `${table} ${head.table}`;
		let family = this.families.get(pair);
		if (!family) {
			family = new Map();
			for (const row of all) {
				const ancestor = ancestorIn(row, head.table);
				if (!ancestor) continue;
				const list = family.get(ancestor);
				if (list) list.push(row);
				else family.set(ancestor, [row]);
			}
			this.families.set(pair, family);
		}
		return family.get(head) ?? [];
	}

	/** Whether anything changed in this pass in the family of `head`, the rows that it belongs to included. */
	familyChanged(table: string, head: RowState | null): boolean {
		const tables = [table, ...this.ancestorsOf(table)];
		if (!head) return tables.some((name) => this.changedIn(name).size > 0 || this.reshaped.has(name));
		return tables.some((name) => {
			for (const row of this.changedIn(name))
				if (ancestorIn(row, head.table) === head || ancestorIn(head, name) === row) return true;
			return false;
		});
	}
}

const none: ReadonlySet<RowState> = new Set();

function sameRow(a: ReadingRow, b: ReadingRow): boolean {
	if (a === b) return true;
	if (a.status !== b.status || a.reason !== b.reason || a.id !== b.id) return false;
	const names = Object.keys(a.cells);
	return (
		names.length === Object.keys(b.cells).length && names.every((name) => a.cells[name] === b.cells[name])
	);
}
