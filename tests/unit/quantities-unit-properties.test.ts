import fc from 'fast-check';
import katex from 'katex';
import { describe, expect, it } from 'vitest';
import {
	add,
	divide,
	divideUnits,
	exactly,
	formatStated,
	multiply,
	multiplyUnits,
	parseUnit,
	plainNumber,
	power,
	sameDimension,
	standardUncertainty,
	subtract,
	toldIn,
	unitHtml,
	unitSpeech,
	unitTex,
	unitText,
	valueIn,
	withDeviations,
	type Quantity,
	type Unit
} from '$lib/quantities';

const seed = 310;
const symbols = ['m', 'cm', 'nm', 'g', 'mg', 'kg', 's', 'min', 'h', 'A', 'mV', 'V', 'K', 'mol', 'mmol', 'L', 'mL', 'M', 'N', 'J', 'kJ', 'cal', 'W', 'Pa', 'kPa', 'bar', 'atm', 'torr', 'mmHg', 'mmH2O', 'inHg', 'psi', 'deg', 'rad', '%', 'ohm', 'C', 'eV', 'µm', 'Hz', 'S', 'ppm']; // prettier-ignore
const factors = fc.array(fc.tuple(fc.constantFrom(...symbols), fc.constantFrom(-3, -2, -1, 1, 2, 3)), {
	minLength: 1,
	maxLength: 4
});
const units = factors.map((list) =>
	parseUnit(list.map(([symbol, exponent]) => `${symbol}^${exponent}`).join(' '))
);

function near(a: Unit, b: Unit): void {
	expect(sameDimension(a.dimension, b.dimension)).toBe(true);
	expect(a.factor / b.factor).toBeCloseTo(1, 12);
}

describe('any unit', () => {
	it('reads back from its own text', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(units, (unit) => {
				const back = parseUnit(unitText(unit));
				near(back, unit);
				expect(unitText(back)).toBe(unitText(unit));
			}),
			{ numRuns: 2000, seed }
		);
	});

	it('is written so that KaTeX takes it, and said in words', { timeout: 60_000 }, () => {
		// KaTeX has no upright µ: it sets the one of the page's own font, and says so in the console each time
		const set = units.filter((unit) => unit.factors.every(({ prefix }) => prefix !== 'u'));
		fc.assert(
			fc.property(set, fc.double({ min: -1e9, max: 1e9, noNaN: true }), (unit, value) => {
				const { tex, html } = formatStated(
					value,
					{ kind: 'standard', size: Math.abs(value) / 100 + 1e-3 },
					unit
				);
				expect(() => katex.renderToString(`${tex} = ${unitTex(unit)}`, { throwOnError: true })).not.toThrow();
				expect(html.split('<sup>').length).toBe(html.split('</sup>').length);
				expect(unitHtml(unit)).not.toMatch(/undefined|NaN/);
				expect(unitSpeech(unit)).toMatch(unit.factors.length === 0 ? /^$/ : /^[a-z]/i);
			}),
			{ numRuns: 300, seed }
		);
	});

	it('commutes, and a division undoes a multiplication', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(units, units, (a, b) => {
				near(multiplyUnits(a, b), multiplyUnits(b, a));
				near(divideUnits(multiplyUnits(a, b), b), a);
			}),
			{ numRuns: 1000, seed }
		);
	});
});

describe('any calculation', () => {
	/** pairs of the same kind, so that sums make sense whatever is drawn */
	const kinds = fc.constantFrom(['Pa', 'torr', 'kPa', 'atm', 'mmHg'], ['J', 'kJ', 'cal', 'kcal'], ['s', 'min', 'h'], ['mol/L', 'M', 'mmol/mL', 'mol/m3'], ['deg', 'rad', '%', '1']); // prettier-ignore
	const sizes = fc.double({ min: 0.1, max: 900, noNaN: true });
	const input = { component: { id: 'a', label: 'a', scope: 'reading', degreesOfFreedom: Infinity } } as const;

	it('gives the same in whatever units its inputs are told', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(kinds, sizes, sizes, fc.nat(), fc.nat(), (names, x, y, i, j) => {
				const unit = (k: number) => parseUnit(names[k % names.length] ?? '1');
				const base = withDeviations(exactly(x, unit(0)), [[input, 0.01 * x * unit(0).factor]]);
				const calculate = (a: Quantity, b: Quantity) =>
					divide(multiply(add(a, b), subtract(a, b)), power(add(b, a), plainNumber(2)));
				const plain = calculate(base, exactly(y, unit(0)));
				// the same value, typed in other units
				const other = exactly(valueIn(exactly(y, unit(0)), unit(j)), unit(j));
				const again = calculate(toldIn(base, unit(i)), other);
				expect(again.value).toBeCloseTo(plain.value, 12);
				expect(standardUncertainty(again)).toBeCloseTo(standardUncertainty(plain), 12);
				expect(again.dimension).toEqual(plain.dimension);
			}),
			{ numRuns: 1000, seed }
		);
	});

	it('tells a value back in the unit that it was typed in', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(units, sizes, (unit, value) => {
				expect(valueIn(exactly(value, unit)) / value).toBeCloseTo(1, 14);
			}),
			{ numRuns: 1000, seed }
		);
	});

	it(
		'leaves nothing of a difference with itself, along whatever way it was computed',
		{ timeout: 60_000 },
		() => {
			fc.assert(
				fc.property(sizes, sizes, (x, y) => {
					const a = withDeviations(plainNumber(x), [[input, 0.1]]);
					const b = plainNumber(y);
					const one = multiply(add(a, b), b);
					expect(subtract(one, one)).toMatchObject({ value: 0 });
					expect(subtract(one, one).parts.size).toBe(0);
					const way = add(multiply(a, b), multiply(b, b));
					expect(standardUncertainty(subtract(one, way))).toBeLessThan(1e-14 * y);
				}),
				{ seed }
			);
		}
	);
});
