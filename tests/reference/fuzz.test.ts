import { describe, expect, it } from 'vitest';
import { exactly, parseUnit, QuantityProblem, type Quantity } from '$lib/quantities';
import { evaluate, readTable, type Readings } from '$lib/worksheets';
import { evaluateFormula, holds, isCondition, type Surroundings } from '../../src/lib/worksheets/formula';
import { FormulaProblem, parseFormula, type FormulaScope } from '../../src/lib/worksheets/formula-parser';
import { worksheetOf } from './simulated-session';

const count = 100_000;

/** Marsaglia's xorshift32: the same texts at every run, and no generator of the product. */
function random(seed: number): (below: number) => number {
	let state = seed;
	return (below) => {
		state ^= state << 13;
		state ^= state >>> 17;
		state ^= state << 5;
		return (state >>> 0) % below;
	};
}

const scope: FormulaScope = {
	names: new Set(['a', 'b', 'R', 'T_b']),
	choices: new Set(['gauge']),
	tables: new Map([
		['runs', { ancestors: [], columns: new Map([['run', 'text'], ['k', 'number']]) }], // prettier-ignore
		['data', { ancestors: ['runs'], columns: new Map([['run', 'text'], ['t', 'number'], ['x', 'number']]) }] // prettier-ignore
	]),
	table: 'data'
};

const atoms = ['a', 'b', 'R', 'T_b', 'gauge', 'k', 't', 'x', 'run', '1', '0', '2.5', '1e300', '1e-300', '7', 'Pa', 'K', 'min', 'kJ/mol', '"A"', '""', 'c_0', 'Infinity', 'NaN', 'i', 'pi', 'e', '__proto__', 'constructor', 'this', 'true', 'null']; // prettier-ignore
const joints = [' + ', ' - ', ' * ', ' / ', ' ^ ', ' ', ' == ', ' < ', ' >= ', ' and ', ' or ', '; ', ', ', ' = ', ' % ', ' ? ', ' : ', '.', "'", '!', ' to ']; // prettier-ignore
const calls = ['ln', 'log10', 'exp', 'sqrt', 'abs', 'sin', 'acos', 'atan', 'kelvin', 'mean', 'weighted_mean', 'sum', 'min', 'max', 'count', 's', 'u', 'initial', 'final', 'integral', 'interpolate', 'if', 'given', 'not', 'import', 'eval', 'toString', 'f']; // prettier-ignore
const noise = [...'()[]{}"\'\\+-*/^.,;:=<>!?%&|~@#$_ \t\n0123456789aexkK\u2212\u00b0\u0000\ud800']; // prettier-ignore

function formulaText(pick: (below: number) => number, depth: number): string {
	const of = (list: readonly string[]) => list[pick(list.length)] ?? '';
	const kind = pick(20);
	if (depth <= 0 || kind < 4) return of(atoms);
	if (kind < 11) return `${formulaText(pick, depth - 1)}${of(joints)}${formulaText(pick, depth - 1)}`;
	if (kind < 13) return `(${formulaText(pick, depth - 1)})`;
	if (kind < 14) return `-${formulaText(pick, depth - 1)}`;
	if (kind < 19) {
		const args = Array.from({ length: 1 + pick(4) }, () => formulaText(pick, depth - 1));
		return `${of(calls)}(${args.join(', ')})`;
	}
	return Array.from({ length: pick(30) }, () => of(noise)).join('');
}

describe('hostile texts', () => {
	it('100,000 formulas are refused in words or give finite values, within bounded steps', () => {
		const pick = random(310);
		const value = (size: number, unit: string): Quantity => exactly(size, parseUnit(unit));
		let [steps, most, taken] = [0, 0, 0];
		const surroundings: Surroundings = {
			quantity: (leaf) =>
				leaf.op === 'over'
					? value(3, '1')
					: value(
							pick(9) - 4,
							leaf.op === 'name' && leaf.name === 'R'
								? 'J/(mol K)'
								: leaf.op === 'column' && leaf.column === 't'
									? 'degC'
									: '1'
						),
			text: () => 'A',
			given: () => pick(2) === 0,
			step: () => {
				steps += 1;
			}
		};
		for (let i = 0; i < count; i += 1) {
			const text = formulaText(pick, 1 + pick(5));
			try {
				const formula = parseFormula(text, scope);
				steps = 0;
				if (isCondition(formula)) holds(formula, surroundings);
				else {
					const { value: result } = evaluateFormula(formula, surroundings);
					if (!Number.isFinite(result)) throw new Error(`${text} gives ${result}`);
					taken += 1;
				}
				most = Math.max(most, steps);
			} catch (cause) {
				if (!(cause instanceof FormulaProblem || cause instanceof QuantityProblem)) {
					throw new Error(`"${text}": ${String(cause)}`, { cause });
				}
				if (cause.message.length < 10 || cause.message.length > 700)
					throw new Error(`"${text}" is refused as "${cause.message}"`, { cause });
			}
		}
		// a generator that made only rubbish would show nothing
		expect(taken).toBeGreaterThan(count / 20);
		expect(most).toBeLessThanOrEqual(500);
	}, 300_000);

	it('a text of ten thousand parentheses is refused', () => {
		for (const text of [
			'('.repeat(900) + '1' + ')'.repeat(900),
			'-'.repeat(1_900) + '1',
			'('.repeat(10_000),
			'1+'.repeat(999) + '1'
		]) {
			expect(() => parseFormula(text, scope)).toThrow(FormulaProblem);
		}
	});

	it('100,000 CSV texts never crash, and what comes of them is told or finite', () => {
		const pick = random(4310);
		const worksheet = worksheetOf('mutarotation');
		const tables = worksheet.tables.filter(({ fixed }) => fixed === null);
		const pieces = ['run', 't / min', 'alpha / deg', 'A', 'B', '1.5', '-3', '25,0', '1e999', '1e-400', '0', '', '"', '""', '"a', 'NaN', 'Infinity', '\u22123.2', '7.31(5)', '1 000', '0x10', '=1+1', '\ufeff', '\u0000', '\ud800', '٣', '12 \u00b0C', 't / s', 'alpha (deg)', '1.2.3', '--1']; // prettier-ignore
		const ends = [',', ',', ',', ';', '\t', '\n', '\n', '\r\n', '\r', ' '];
		let evaluated = 0;
		for (let i = 0; i < count; i += 1) {
			const table = tables[pick(tables.length)];
			if (!table) throw new Error('no table');
			const length = pick(24);
			let text = '';
			for (let k = 0; k < length; k += 1)
				text += `${pieces[pick(pieces.length)] ?? ''}${ends[pick(ends.length)] ?? ''}`;
			const read = readTable(text, table.columns);
			if (i % 50 !== 0) continue;
			evaluated += 1;
			const rows = read.rows.map(({ cells }, n) => ({ id: String(n), cells, status: 'used' as const }));
			const readings: Readings = {
				parameters: { c_glc: pieces[pick(pieces.length)] ?? '' },
				tables: { [table.name]: rows }
			};
			const shown = evaluate(worksheet, readings);
			for (const quantity of Object.values(shown.quantities)) {
				for (const number of [quantity.value, quantity.standardUncertainty, quantity.expanded95]) {
					if (number !== null && !Number.isFinite(number))
						throw new Error(`${quantity.name} is ${number} from ${JSON.stringify(text)}`);
				}
			}
			for (const { rows: cells } of Object.values(shown.tables)) {
				for (const row of cells) {
					for (const cell of Object.values(row.cells)) {
						if (cell.value !== null && !Number.isFinite(cell.value))
							throw new Error(`a cell is ${cell.value} from ${JSON.stringify(text)}`);
					}
				}
			}
		}
		expect(evaluated).toBe(count / 50);
	}, 300_000);
});
