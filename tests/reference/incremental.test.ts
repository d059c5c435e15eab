import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { evaluate, Evaluator, type ReadingRow, type Readings, type Worksheet } from '$lib/worksheets';
import { exampleOf, experiments } from './example-readings';
import { worksheetOf } from './simulated-session';

/** One thing somebody does at the bench; numbers pick where, and may be larger than what is there. */
type Edit =
	| { what: 'cell'; table: number; row: number; column: number; text: string }
	| { what: 'status'; table: number; row: number; status: ReadingRow['status'] }
	| { what: 'add'; table: number; like: number; at: number }
	| { what: 'remove'; table: number; row: number }
	| { what: 'swap'; table: number; row: number }
	| { what: 'parameter'; parameter: number; text: string };

const place = fc.nat(400);
const number = fc.constantFrom('', '0', '1', '12.5', '-3', '1e3', '25,0', '7.31(5)', 'abc', '0.02', '99');
const edit: fc.Arbitrary<Edit> = fc.oneof(
	{
		weight: 5,
		arbitrary: fc.record({
			what: fc.constant('cell' as const),
			table: place,
			row: place,
			column: place,
			text: number
		})
	},
	fc.record({
		what: fc.constant('status' as const),
		table: place,
		row: place,
		status: fc.constantFrom('used' as const, 'aborted' as const, 'excluded' as const)
	}),
	fc.record({ what: fc.constant('add' as const), table: place, like: place, at: place }),
	fc.record({ what: fc.constant('remove' as const), table: place, row: place }),
	fc.record({ what: fc.constant('swap' as const), table: place, row: place }),
	fc.record({ what: fc.constant('parameter' as const), parameter: place, text: number })
);

/** A plain model of what the readings are after an edit: new objects where something changed, the same elsewhere. */
function after(worksheet: Worksheet, readings: Readings, edit: Edit, n: number): Readings {
	if (edit.what === 'parameter') {
		const { name } = worksheet.parameters[edit.parameter % worksheet.parameters.length] ?? { name: '' };
		return { ...readings, parameters: { ...readings.parameters, [name]: edit.text } };
	}
	const typed = worksheet.tables.filter(({ fixed }) => fixed === null);
	const table = typed[edit.table % typed.length];
	const rows = table && readings.tables[table.name];
	if (!table || !rows || rows.length === 0) return readings;
	const set = (changed: ReadingRow[]): Readings => ({
		...readings,
		tables: { ...readings.tables, [table.name]: changed }
	});
	if (edit.what === 'add') {
		const like = rows[edit.like % rows.length];
		const at = edit.at % (rows.length + 1);
		const row: ReadingRow = { id: `new-${n}`, cells: { ...like?.cells }, status: 'used' };
		return set([...rows.slice(0, at), row, ...rows.slice(at)]);
	}
	const at = edit.row % rows.length;
	if (edit.what === 'remove') return set(rows.filter((_, i) => i !== at));
	if (edit.what === 'swap') {
		const next = (at + 1) % rows.length;
		return set(rows.map((row, i) => (i === at ? (rows[next] ?? row) : i === next ? (rows[at] ?? row) : row)));
	}
	return set(rows.map((row, i) => (i === at ? changed(row) : row)));

	function changed(row: ReadingRow): ReadingRow {
		if (edit.what === 'status') return { ...row, status: edit.status, reason: 'a draught' };
		if (edit.what !== 'cell') return row;
		const columns = table?.columns.filter(({ formula }) => formula === null) ?? [];
		const column = columns[edit.column % columns.length];
		if (!column) return row;
		// a text cell takes a text that stands in another row: it then belongs elsewhere
		const other = rows?.[edit.column % (rows.length || 1)]?.cells[column.name] ?? '';
		return { ...row, cells: { ...row.cells, [column.name]: column.kind === 'number' ? edit.text : other } };
	}
}

describe('an evaluation that is kept from edit to edit', () => {
	it.each(experiments)(
		'says what a fresh one says (%s)',
		(slug) => {
			const worksheet = worksheetOf(slug);
			const start = exampleOf(slug, worksheet);
			fc.assert(
				fc.property(fc.array(edit, { minLength: 1, maxLength: 6 }), (edits) => {
					const kept = new Evaluator(worksheet);
					kept.evaluate(start);
					let readings = start;
					edits.forEach((each, n) => {
						readings = after(worksheet, readings, each, n);
						expect(JSON.stringify(kept.evaluate(readings))).toBe(
							JSON.stringify(evaluate(worksheet, readings))
						);
					});
				}),
				{ numRuns: 12, seed: 310 }
			);
		},
		120_000
	);

	it('takes values stated in place of computed ones, and lets them go again', () => {
		const worksheet = worksheetOf('heat-capacity-ratio');
		const readings = exampleOf('heat-capacity-ratio', worksheet);
		const kept = new Evaluator(worksheet);
		const plain = kept.evaluate(readings);
		const carried = kept.evaluate(readings, [{ name: 'gamma', row: 'argon', text: '1.60' }]);
		expect(carried.quantities['gamma.argon']?.value).toBe(1.6);
		// C_V = R / (gamma - 1): 8.314462618 / 0.6
		expect(carried.quantities['C_V.argon']?.value).toBeCloseTo(13.8574377, 7);
		expect(carried.quantities['C_V.nitrogen']).toEqual(plain.quantities['C_V.nitrogen']);
		expect(kept.evaluate(readings)).toEqual(plain);
	});
});
