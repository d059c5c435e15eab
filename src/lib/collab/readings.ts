import * as Y from 'yjs';
import type { ReadingRow, Readings } from '$lib/worksheets';
import { compareOrder, ordersBetween } from './order';

// Shape of a readings document:
//   map 'parameters'    name -> text as typed
//   map 'rows:<table>'  row id -> map { <column> -> text as typed, '$order', '$status', '$reason' }
// Texts are plain strings: two people in one cell at once leave the later one, whole, never a mixture of digits.
const orderKey = '$order';
const statusKey = '$status';
const reasonKey = '$reason';

type Row = Y.Map<string>;
export type RowStatus = ReadingRow['status'];

export interface NewRow {
	/** unique in the table, chosen by the caller */
	id: string;
	cells: Record<string, string>;
}

/** The readings as they stand, tables in the order asked for, rows in theirs. */
export function readReadings(doc: Y.Doc, tableNames: readonly string[]): Readings {
	const parameters: Record<string, string> = {};
	for (const [name, text] of sortedEntries(parametersOf(doc)))
		if (typeof text === 'string') parameters[name] = text;
	const tables: Record<string, ReadingRow[]> = {};
	for (const table of tableNames)
		tables[table] = orderedRows(doc, table).map(({ id, row }) => readRow(id, row));
	return { parameters, tables };
}

/** The shared types that hold the readings, for an undo manager to watch. */
export function readingsParts(doc: Y.Doc, tableNames: readonly string[]): Y.AbstractType<unknown>[] {
	return [parametersOf(doc), ...tableNames.map((table) => rowsOf(doc, table))] as Y.AbstractType<unknown>[];
}

/** Row ids in order. */
export function rowIds(doc: Y.Doc, table: string): string[] {
	return orderedRows(doc, table).map(({ id }) => id);
}

/** null empties it. */
export function setParameter(doc: Y.Doc, name: string, text: string | null): void {
	doc.transact(() => write(parametersOf(doc), name, text ?? ''));
}

/**
 * Inserts rows in the order given: after the row `after`, at the end when it is not given or gone, at the top for null.
 * Rows whose id is there already keep their place and get the cells given.
 */
export function insertRows(doc: Y.Doc, table: string, rows: readonly NewRow[], after?: string | null): void {
	doc.transact(() => {
		const there = orderedRows(doc, table);
		const map = rowsOf(doc, table);
		const fresh = rows.filter(
			(row, index) => !map.has(row.id) && rows.findIndex((other) => other.id === row.id) === index
		);
		for (const row of rows) if (map.has(row.id)) writeCells(map.get(row.id), row.cells);
		const found = after === undefined || after === null ? -1 : there.findIndex(({ id }) => id === after);
		const index = after === null ? 0 : found === -1 ? there.length : found + 1;
		const before = there[index - 1]?.order ?? null;
		// Two people who inserted at once gave equal places; what follows of them has to move for anything to fit between.
		const tied = [];
		for (let at = index; before !== null && there[at]?.order === before; at += 1) tied.push(there[at]);
		const beyond = there[index + tied.length]?.order ?? null;
		const orders = ordersBetween(before, beyond, fresh.length + tied.length);
		fresh.forEach((row, position) => {
			const made: Row = new Y.Map();
			made.set(orderKey, orders[position] ?? '');
			for (const [column, text] of byName(row.cells))
				if (isColumn(column) && text !== '') made.set(column, text);
			map.set(row.id, made);
		});
		tied.forEach((entry, position) =>
			entry?.row.set(orderKey, orders[fresh.length + position] ?? entry.order)
		);
	});
}

/** false when the row is gone. An empty text empties the cell. */
export function setCell(doc: Y.Doc, table: string, row: string, column: string, text: string): boolean {
	if (!isColumn(column)) throw new RangeError(`"${column}" cannot name a column`);
	return change(doc, table, row, (cells) => write(cells, column, text));
}

/** false when the row is gone. A reason belongs to every status but 'used'. */
export function setStatus(
	doc: Y.Doc,
	table: string,
	row: string,
	status: RowStatus,
	reason?: string
): boolean {
	return change(doc, table, row, (cells) => {
		write(cells, statusKey, status === 'used' ? '' : status);
		write(cells, reasonKey, status === 'used' ? '' : (reason ?? ''));
	});
}

/** false when the row was gone already. */
export function removeRow(doc: Y.Doc, table: string, row: string): boolean {
	const map = rowsOf(doc, table);
	if (!map.has(row)) return false;
	map.delete(row);
	return true;
}

/** Puts readings into an empty document. */
export function writeReadings(doc: Y.Doc, readings: Readings): void {
	doc.transact(() => {
		for (const [name, text] of byName(readings.parameters)) setParameter(doc, name, text);
		for (const [table, rows] of byName(readings.tables)) {
			insertRows(doc, table, rows);
			for (const row of rows)
				if (row.status !== 'used') setStatus(doc, table, row.id, row.status, row.reason);
		}
	});
}

function change(doc: Y.Doc, table: string, id: string, edit: (row: Row) => void): boolean {
	const row = rowsOf(doc, table).get(id);
	if (!(row instanceof Y.Map)) return false;
	doc.transact(() => edit(row));
	return true;
}

/** Nothing is written that stands there already: every write takes room in the log for good. */
function write(map: Y.Map<string>, key: string, text: string): void {
	if (text === '') {
		if (map.has(key)) map.delete(key);
	} else if (map.get(key) !== text) map.set(key, text);
}

function writeCells(row: Row | undefined, cells: Record<string, string>): void {
	if (!(row instanceof Y.Map)) return;
	for (const [column, text] of byName(cells)) if (isColumn(column)) write(row, column, text);
}

function readRow(id: string, row: Row): ReadingRow {
	const cells: Record<string, string> = {};
	for (const [column, text] of sortedEntries(row))
		if (isColumn(column) && typeof text === 'string') cells[column] = text;
	const status = row.get(statusKey);
	if (status !== 'aborted' && status !== 'excluded') return { id, cells, status: 'used' };
	const reason = row.get(reasonKey);
	return typeof reason === 'string' ? { id, cells, status, reason } : { id, cells, status };
}

interface OrderedRow {
	id: string;
	row: Row;
	order: string;
}

function orderedRows(doc: Y.Doc, table: string): OrderedRow[] {
	const rows: OrderedRow[] = [];
	// What another program put there in another shape is not a row.
	rowsOf(doc, table).forEach((row, id) => {
		if (!(row instanceof Y.Map)) return;
		const order: unknown = row.get(orderKey);
		rows.push({ id, row, order: typeof order === 'string' ? order : '' });
	});
	return rows.sort(compareOrder);
}

/** By name: maps list their keys in the order of arrival, which differs between people. */
function sortedEntries(map: Y.Map<string>): [string, unknown][] {
	return [...map.entries()].sort(compareNames);
}

/** By name, so that equal readings are written as equal bytes. */
function byName<Value>(record: Record<string, Value>): [string, Value][] {
	return Object.entries(record).sort(compareNames);
}

function compareNames([a]: [string, unknown], [b]: [string, unknown]): number {
	return a < b ? -1 : a > b ? 1 : 0;
}

function isColumn(name: string): boolean {
	return name !== '' && !name.startsWith('$') && name !== '__proto__';
}

function parametersOf(doc: Y.Doc): Y.Map<string> {
	return doc.getMap<string>('parameters');
}

function rowsOf(doc: Y.Doc, table: string): Y.Map<Row> {
	return doc.getMap<Row>(`rows:${table}`);
}
