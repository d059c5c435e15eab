import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import * as Y from 'yjs';
import {
	compareOrder,
	documentName,
	encodeMessage,
	insertRows,
	orderBetween,
	ordersBetween,
	parseClientMessage,
	parseDocumentName,
	parseServerMessage,
	readReadings,
	readText,
	removeRow,
	rowIds,
	sectionText,
	seedReadings,
	seedSection,
	setCell,
	setParameter,
	setStatus,
	writeText
} from '$lib/collab';
import type { ReadingRow, Readings } from '$lib/worksheets';

const table = 'readings';

function sync(from: Y.Doc, to: Y.Doc): void {
	Y.applyUpdate(to, Y.encodeStateAsUpdate(from, Y.encodeStateVector(to)));
}

function docs(count: number): Y.Doc[] {
	return Array.from({ length: count }, (_, index) => {
		const doc = new Y.Doc();
		doc.clientID = 100 + index;
		return doc;
	});
}

describe('places of rows', () => {
	it('has room between any two, for ever', () => {
		fc.assert(
			fc.property(fc.array(fc.nat(), { minLength: 1, maxLength: 120 }), (choices) => {
				const orders: string[] = [];
				for (const choice of choices) {
					const index = choice % (orders.length + 1);
					const made = orderBetween(orders[index - 1] ?? null, orders[index] ?? null);
					expect(made.endsWith('0')).toBe(false);
					orders.splice(index, 0, made);
				}
				expect([...orders].sort((a, b) => (a < b ? -1 : 1))).toEqual(orders);
				expect(new Set(orders).size).toBe(orders.length);
			})
		);
	});

	it('stays short for rows typed in order', () => {
		const orders = ordersBetween(null, null, 2_000);
		expect(orders.slice(0, 2)).toEqual(['a1', 'a2']);
		expect(orders[61]).toBe('b11');
		expect(Math.max(...orders.map((order) => order.length))).toBe(3);
		for (let index = 1; index < orders.length; index += 1)
			expect(`${orders[index - 1]}` < `${orders[index]}`).toBe(true);
	});

	it('stays short for a paste between two rows, and goes on after deletions', () => {
		const orders = ordersBetween('a1', 'a2', 2_000);
		expect(Math.max(...orders.map((order) => order.length))).toBeLessThanOrEqual(6);
		expect(`${orders[0]}` > 'a1' && `${orders[1_999]}` < 'a2').toBe(true);
		for (const left of ['b', 'b0V', 'az5', '0V', 'zz', `z${'z'.repeat(26)}`])
			expect(orderBetween(left, null) > left).toBe(true);
	});

	it('refuses a place that is none', () => {
		expect(() => orderBetween('a2', 'a1')).toThrow(RangeError);
		expect(() => orderBetween('a1', 'a1')).toThrow(RangeError);
	});

	it('orders equal places by id', () => {
		expect(compareOrder({ order: 'a1', id: 'x' }, { order: 'a1', id: 'y' })).toBe(-1);
		expect(compareOrder({ order: 'a1', id: 'y' }, { order: 'a1', id: 'x' })).toBe(1);
		expect(compareOrder({ order: 'Z', id: 'y' }, { order: 'a', id: 'x' })).toBe(-1);
	});
});

describe('readings document', () => {
	it('keeps the text as typed and empties with an empty text', () => {
		const [doc = new Y.Doc()] = docs(1);
		setParameter(doc, 'p_b', '760.0');
		insertRows(doc, table, [{ id: 'r1', cells: { p: '75,6o', T: '25.30' } }]);
		expect(readReadings(doc, [table, 'other'])).toEqual({
			parameters: { p_b: '760.0' },
			tables: { readings: [{ id: 'r1', cells: { T: '25.30', p: '75,6o' }, status: 'used' }], other: [] }
		});
		setCell(doc, table, 'r1', 'p', '');
		setParameter(doc, 'p_b', null);
		expect(readReadings(doc, [table])).toEqual({
			parameters: {},
			tables: { readings: [{ id: 'r1', cells: { T: '25.30' }, status: 'used' }] }
		});
	});

	it('keeps a reason with a status and drops it with it', () => {
		const [doc = new Y.Doc()] = docs(1);
		insertRows(doc, table, [{ id: 'r1', cells: {} }]);
		setStatus(doc, table, 'r1', 'excluded', 'bumped the flask');
		expect(readReadings(doc, [table]).tables[table]).toEqual([
			{ id: 'r1', cells: {}, status: 'excluded', reason: 'bumped the flask' }
		]);
		setStatus(doc, table, 'r1', 'used');
		expect(readReadings(doc, [table]).tables[table]).toEqual([{ id: 'r1', cells: {}, status: 'used' }]);
	});

	it('says when a row is gone and refuses reserved columns', () => {
		const [doc = new Y.Doc()] = docs(1);
		insertRows(doc, table, [{ id: 'r1', cells: {} }]);
		expect(removeRow(doc, table, 'r1')).toBe(true);
		expect(removeRow(doc, table, 'r1')).toBe(false);
		expect(setCell(doc, table, 'r1', 'p', '1')).toBe(false);
		expect(setStatus(doc, table, 'r1', 'used')).toBe(false);
		expect(() => setCell(doc, table, 'r1', '$order', 'a1')).toThrow(RangeError);
	});

	it('writes nothing that stands there already', () => {
		const [doc = new Y.Doc()] = docs(1);
		insertRows(doc, table, [{ id: 'r1', cells: { p: '1' } }]);
		let updates = 0;
		doc.on('update', () => (updates += 1));
		setCell(doc, table, 'r1', 'p', '1');
		setCell(doc, table, 'r1', 'T', '');
		setStatus(doc, table, 'r1', 'used');
		setParameter(doc, 'p_b', null);
		insertRows(doc, table, [{ id: 'r1', cells: { p: '1' } }]);
		expect(updates).toBe(0);
	});

	it('puts a row between two that got the same place from two people', () => {
		const [a = new Y.Doc(), b = new Y.Doc()] = docs(2);
		insertRows(a, table, [
			{ id: 'first', cells: {} },
			{ id: 'last', cells: {} }
		]);
		sync(a, b);
		insertRows(a, table, [{ id: 'm1', cells: {} }], 'first');
		insertRows(b, table, [{ id: 'm2', cells: {} }], 'first');
		sync(a, b);
		sync(b, a);
		expect(rowIds(a, table)).toEqual(['first', 'm1', 'm2', 'last']);
		insertRows(b, table, [{ id: 'between', cells: {} }], 'm1');
		expect(rowIds(b, table)).toEqual(['first', 'm1', 'between', 'm2', 'last']);
		insertRows(b, table, [{ id: 'top', cells: {} }], null);
		insertRows(b, table, [{ id: 'end', cells: {} }], 'no such row');
		expect(rowIds(b, table)).toEqual(['top', 'first', 'm1', 'between', 'm2', 'last', 'end']);
	});

	it('takes things of another shape for no rows', () => {
		const [doc = new Y.Doc()] = docs(1);
		doc.getMap(`rows:${table}`).set('odd', 'text');
		doc.getMap('parameters').set('p_b', 5);
		expect(readReadings(doc, [table])).toEqual({ parameters: {}, tables: { readings: [] } });
	});
});

// One person's edits against a plain list.
type Edit =
	| { do: 'insert'; at: number; count: number }
	| { do: 'cell'; at: number; column: string; text: string }
	| { do: 'status'; at: number; status: ReadingRow['status'] }
	| { do: 'remove'; at: number };

const edit: fc.Arbitrary<Edit> = fc.oneof(
	{
		weight: 3,
		arbitrary: fc.record({
			do: fc.constant('insert' as const),
			at: fc.nat(50),
			count: fc.integer({ min: 1, max: 4 })
		})
	},
	{
		weight: 4,
		arbitrary: fc.record({
			do: fc.constant('cell' as const),
			at: fc.nat(50),
			column: fc.constantFrom('p', 'T'),
			text: fc.constantFrom('', '1', '2.0', 'x')
		})
	},
	{
		weight: 1,
		arbitrary: fc.record({
			do: fc.constant('status' as const),
			at: fc.nat(50),
			status: fc.constantFrom('used' as const, 'aborted' as const, 'excluded' as const)
		})
	},
	{ weight: 1, arbitrary: fc.record({ do: fc.constant('remove' as const), at: fc.nat(50) }) }
);

// Seconds on an idle machine; the limit leaves room for one that runs other things at once.
describe('random edits', { timeout: 30_000 }, () => {
	it('of one person do what they do to a plain list', () => {
		fc.assert(
			fc.property(fc.array(edit, { maxLength: 60 }), (edits) => {
				const doc = new Y.Doc();
				let model: ReadingRow[] = [];
				let made = 0;
				for (const step of edits) {
					const at = model.length === 0 ? -1 : step.at % model.length;
					const row = model[at];
					if (step.do === 'insert') {
						const rows = Array.from({ length: step.count }, () => ({
							id: `r${(made += 1)}`,
							cells: { p: String(made) }
						}));
						insertRows(doc, table, rows, row?.id ?? null);
						model.splice(
							at + 1,
							0,
							...rows.map(({ id, cells }) => ({ id, cells: { ...cells }, status: 'used' as const }))
						);
					} else if (row && step.do === 'cell') {
						setCell(doc, table, row.id, step.column, step.text);
						if (step.text === '')
							row.cells = Object.fromEntries(
								Object.entries(row.cells).filter(([column]) => column !== step.column)
							);
						else row.cells[step.column] = step.text;
					} else if (row && step.do === 'status') {
						setStatus(doc, table, row.id, step.status, 'why');
						row.status = step.status;
						row.reason = 'why';
						if (step.status === 'used') delete row.reason;
					} else if (row) {
						removeRow(doc, table, row.id);
						model = model.filter((other) => other !== row);
					}
				}
				expect(readReadings(doc, [table]).tables[table]).toEqual(model);
			}),
			{ numRuns: 100 }
		);
	});

	it('of three people converge, lose no row, and keep what each inserted together in its order', () => {
		const step = fc.oneof(
			{ weight: 5, arbitrary: fc.record({ who: fc.nat(2), edit }) },
			{ weight: 2, arbitrary: fc.record({ from: fc.nat(2), to: fc.nat(2) }) }
		);
		fc.assert(
			fc.property(fc.array(step, { maxLength: 80 }), (steps) => {
				const people = docs(3);
				const inserted: string[][] = [];
				const removed = new Set<string>();
				const written = new Map<string, Set<string>>();
				let made = 0;
				for (const one of steps) {
					if ('from' in one) {
						const [from, to] = [people[one.from], people[one.to]];
						if (from && to) sync(from, to);
						continue;
					}
					const doc = people[one.who];
					if (!doc) continue;
					const ids = rowIds(doc, table);
					const id = ids[one.edit.at % Math.max(1, ids.length)];
					if (one.edit.do === 'insert') {
						const rows = Array.from({ length: one.edit.count }, () => ({ id: `r${(made += 1)}`, cells: {} }));
						insertRows(doc, table, rows, id ?? null);
						inserted.push(rows.map((row) => row.id));
						const now = rowIds(doc, table);
						// At the moment of inserting they stand right after the row they were put after.
						expect(now.slice(id === undefined ? 0 : now.indexOf(id) + 1).slice(0, rows.length)).toEqual(
							rows.map((row) => row.id)
						);
					} else if (id !== undefined && one.edit.do === 'cell') {
						setCell(doc, table, id, one.edit.column, one.edit.text);
						const key = `${id} ${one.edit.column}`;
						written.set(key, (written.get(key) ?? new Set()).add(one.edit.text));
					} else if (id !== undefined && one.edit.do === 'remove') {
						removeRow(doc, table, id);
						removed.add(id);
					}
				}
				for (let round = 0; round < 2; round += 1)
					for (const from of people) for (const to of people) sync(from, to);
				const [first, ...others] = people.map((doc) => readReadings(doc, [table]));
				for (const other of others) expect(other).toEqual(first);
				const rows = first?.tables[table] ?? [];
				expect(new Set(rows.map((row) => row.id))).toEqual(
					new Set(inserted.flat().filter((id) => !removed.has(id)))
				);
				const places = new Map(rows.map((row, index) => [row.id, index]));
				for (const group of inserted) {
					const left = group.flatMap((id) => places.get(id) ?? []);
					expect([...left].sort((x, y) => x - y)).toEqual(left);
				}
				for (const row of rows) {
					for (const [column, text] of Object.entries(row.cells))
						expect(written.get(`${row.id} ${column}`)?.has(text)).toBe(true);
				}
			}),
			{ numRuns: 150, seed: 20_261_201 }
		);
	});

	it("of a text converge and keep both people's words", () => {
		fc.assert(
			fc.property(
				fc.string({ unit: 'grapheme', maxLength: 30 }),
				fc.array(
					fc.record({
						who: fc.nat(1),
						at: fc.nat(),
						cut: fc.nat(6),
						text: fc.string({ unit: 'grapheme', maxLength: 6 }),
						sync: fc.boolean()
					}),
					{ maxLength: 30 }
				),
				(start, edits) => {
					const [a = new Y.Doc(), b = new Y.Doc()] = docs(2);
					for (const doc of [a, b]) Y.applyUpdate(doc, seedSection(start));
					for (const { who, at, cut, text, sync: now } of edits) {
						const doc = who === 0 ? a : b;
						const letters = [...readText(doc)];
						const index = at % (letters.length + 1);
						letters.splice(index, cut, text);
						writeText(doc, letters.join(''));
						expect(readText(doc)).toBe(letters.join(''));
						if (now) sync(doc, doc === a ? b : a);
					}
					sync(a, b);
					sync(b, a);
					expect(readText(a)).toBe(readText(b));
				}
			),
			{ numRuns: 100 }
		);
	});
});

describe('section document', () => {
	it("restores an older text by an edit that leaves others' words alone", () => {
		const [a = new Y.Doc(), b = new Y.Doc()] = docs(2);
		Y.applyUpdate(a, seedSection('The flask was warm. The end.'));
		sync(a, b);
		writeText(a, 'The flask was cold. The end.');
		sectionText(b).insert(sectionText(b).length, ' Really.');
		sync(a, b);
		sync(b, a);
		expect(readText(a)).toBe('The flask was cold. The end. Really.');
	});

	it('does not double a text that is seeded twice', () => {
		const doc = new Y.Doc();
		Y.applyUpdate(doc, seedSection('Once.'));
		Y.applyUpdate(doc, seedSection('Once.'));
		expect(readText(doc)).toBe('Once.');
		expect(readText(new Y.Doc())).toBe('');
	});

	it('seeds readings as they were, with the same bytes whatever the order of names', () => {
		const readings: Readings = {
			parameters: { p_b: '756.2', T_room: '21.0' },
			tables: {
				readings: [
					{ id: 'b', cells: { T: '1', p: '2' }, status: 'excluded', reason: 'leak' },
					{ id: 'a', cells: {}, status: 'used' }
				]
			}
		};
		const turned: Readings = {
			parameters: { T_room: '21.0', p_b: '756.2' },
			tables: {
				readings: [
					{ id: 'b', cells: { p: '2', T: '1' }, status: 'excluded', reason: 'leak' },
					{ id: 'a', cells: {}, status: 'used' }
				]
			}
		};
		const doc = new Y.Doc();
		Y.applyUpdate(doc, seedReadings(readings));
		expect(readReadings(doc, ['readings'])).toEqual(readings);
		expect(seedReadings(turned)).toEqual(seedReadings(readings));
	});
});

describe('messages', () => {
	it('come back as they were sent', () => {
		expect(parseClientMessage(encodeMessage({ type: 'barrier', n: 7 }))).toEqual({ type: 'barrier', n: 7 });
		expect(parseServerMessage(encodeMessage({ type: 'stored', n: 7, seq: 42 }))).toEqual({
			type: 'stored',
			n: 7,
			seq: 42
		});
		expect(parseServerMessage(encodeMessage({ type: 'refused', reason: 'Sealed.' }))).toEqual({
			type: 'refused',
			reason: 'Sealed.'
		});
	});

	it.each([
		'',
		'{',
		'null',
		'7',
		'[]',
		'{"type":"barrier"}',
		'{"type":"barrier","n":-1}',
		'{"type":"barrier","n":1.5}',
		'{"type":"stored","n":"7","seq":1}',
		`"${'x'.repeat(20_000)}"`
	])('takes %j for none', (text) => {
		expect(parseClientMessage(text)).toBeNull();
		expect(parseServerMessage(text)).toBeNull();
	});

	it('names documents by id and epoch', () => {
		const id = '0198c0de-0000-7000-8000-00000000002a';
		expect(documentName(id, 3)).toBe(`${id}.3`);
		expect(parseDocumentName(`${id}.3`)).toEqual({ id, epoch: 3 });
		for (const name of [id, `${id}.`, `${id}.03`, `${id}.-1`, `${id}.1e3`, `x.1`, `${id}.1.2`, '../etc.1'])
			expect(parseDocumentName(name)).toBeNull();
		expect(() => documentName('x', 0)).toThrow(RangeError);
	});
});
