import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	add,
	arccosine,
	arcsine,
	arctangent,
	cosine,
	divide,
	exactly,
	log10,
	maximum,
	mean,
	minimum,
	multiply,
	parseUnit,
	plainNumber,
	power,
	QuantityProblem,
	sine,
	squareRoot,
	standardDeviation,
	standardUncertainty,
	subtract,
	tangent,
	thermodynamicTemperature,
	toldIn,
	uncertaintyOf,
	unitText,
	valueIn,
	withDeviations,
	type Quantity,
	type Source
} from '$lib/quantities';

function source(label: string): Source {
	return { component: { id: label, label, scope: 'reading', degreesOfFreedom: Infinity } };
}

function uncertain(value: number, u: number, from = source('a'), unit = '1'): Quantity {
	const told = parseUnit(unit);
	return withDeviations(exactly(value, told), [[from, u * told.factor]]);
}

describe('functions of quantities', () => {
	it.each<[string, (x: Quantity) => Quantity, (x: number) => number]>([
		['log10', log10, Math.log10],
		['sine', sine, Math.sin],
		['cosine', cosine, Math.cos],
		['tangent', tangent, Math.tan],
		['arcsine', arcsine, Math.asin],
		['arccosine', arccosine, Math.acos],
		['arctangent', arctangent, Math.atan]
	])('%s has the right value and derivative', (_, operation, plain) => {
		for (const at of [0.11, 0.5, 0.83]) {
			const h = 1e-5;
			const numeric = (plain(at + h) - plain(at - h)) / (2 * h);
			const result = operation(uncertain(at, 1));
			expect(result.value / plain(at)).toBeCloseTo(1, 14);
			expect(([...result.parts.values()][0] ?? NaN) / numeric).toBeCloseTo(1, 8);
		}
	});

	it('take angles in degrees and give them back', () => {
		expect(sine(exactly(30, parseUnit('deg'))).value).toBeCloseTo(0.5, 15);
		expect(sine(exactly(250, parseUnit('mrad'))).value).toBeCloseTo(Math.sin(0.25), 15);
		expect(valueIn(toldIn(arccosine(plainNumber(0.5)), parseUnit('deg')))).toBeCloseTo(60, 12);
		expect(unitText(arctangent(plainNumber(1)).unit)).toBe('rad');
	});

	it.each<[string, () => Quantity, RegExp]>([
		['sine of a pressure', () => sine(exactly(1, parseUnit('Pa'))), /A sine wants an angle or a number; this is a pressure/],
		['log10 of an energy', () => log10(exactly(1, parseUnit('J'))), /A logarithm wants a number without unit; this is an energy/],
		['log10 of zero', () => log10(plainNumber(0)), /above zero/],
		['arcsine of two', () => arcsine(plainNumber(2)), /from \u22121 to 1/],
		['arccosine of an uncertain one', () => arccosine(uncertain(1, 0.1)), /uncertain 1/],
		['root of an uncertain zero', () => squareRoot(uncertain(0, 0.1)), /uncertain zero/],
		['cube root of an uncertain zero', () => power(uncertain(0, 0.1), plainNumber(0.25)), /uncertain zero/],
		['reciprocal power of zero', () => power(plainNumber(0), plainNumber(-1)), /division by zero/],
		['negative base, uncertain exponent', () => power(plainNumber(-2), uncertain(2, 0.1)), /whole and exact/],
		['largest of none', () => maximum([]), /no largest/],
		['standard deviation of one', () => standardDeviation([plainNumber(1)]), /no scatter/],
		['smallest of a mass and a time', () => minimum([exactly(1, parseUnit('g')), exactly(1, parseUnit('s'))]), /A mass and a time cannot be compared/]
	])('refuse the %s in words', (_, operation, words) => {
		expect(operation).toThrow(QuantityProblem);
		expect(operation).toThrow(words);
	}); // prettier-ignore

	it('keep the unit of a power and of a root', () => {
		expect(unitText(power(exactly(3, parseUnit('cm')), plainNumber(2)).unit)).toBe('cm^2');
		expect(unitText(squareRoot(exactly(9, parseUnit('cm^2'))).unit)).toBe('cm');
		expect(valueIn(squareRoot(exactly(9, parseUnit('cm^2'))))).toBeCloseTo(3, 14);
		const root = squareRoot(exactly(4, parseUnit('mol/L')));
		expect(unitText(root.unit)).toBe('mol^0.5/L^0.5');
		expect(parseUnit(unitText(root.unit))).toEqual(root.unit);
		expect(valueIn(root)).toBeCloseTo(2, 14);
		expect(unitText(power(exactly(8, parseUnit('cm^3')), plainNumber(1 / 3)).unit)).toBe('cm');
	});
});

describe('the extremes and the scatter of a list', () => {
	it('carry the uncertainty of the extreme item alone', () => {
		const [a, b] = [uncertain(1, 0.1, source('a')), uncertain(2, 0.3, source('b'))];
		expect(maximum([a, b])).toMatchObject({ value: 2 });
		expect(standardUncertainty(maximum([a, b]))).toBe(0.3);
		expect(standardUncertainty(minimum([a, b]))).toBe(0.1);
	});

	it('do not care which of two equal ones stands first', () => {
		const [a, b] = [uncertain(2, 0.1, source('a')), uncertain(2, 0.3, source('b'))];
		expect(standardUncertainty(maximum([a, b]))).toBeCloseTo(Math.hypot(0.05, 0.15), 15);
		expect(standardUncertainty(maximum([b, a]))).toBe(standardUncertainty(maximum([a, b])));
		expect(subtract(maximum([a, b]), minimum([b, a])).parts.size).toBe(0);
	});

	it('drops from a standard deviation what all items share', () => {
		const offset = source('offset');
		const values = [1.2, 0.7, 3.1, 2.2];
		const shared = values.map((value) => withDeviations(plainNumber(value), [[offset, 0.5]]));
		const s = standardDeviation(shared);
		expect(s.value).toBeCloseTo(1.0677078252, 10); // by hand: sqrt(3.42 / 3)
		expect(standardUncertainty(s)).toBeLessThan(1e-16);
		const gain = values.map((value) => withDeviations(plainNumber(value), [[offset, 0.01 * value]]));
		expect(standardUncertainty(standardDeviation(gain)) / (0.01 * s.value)).toBeCloseTo(1, 12);
		expect(uncertaintyOf(shared[0] ?? plainNumber(0)).value).toBe(0.5);
	});

	it('gives the same in any order', { timeout: 60_000 }, () => {
		const items = fc.array(fc.tuple(fc.integer({ min: -9, max: 9 }), fc.double({ min: 0.01, max: 2, noNaN: true })), { minLength: 2, maxLength: 9 }); // prettier-ignore
		fc.assert(
			fc.property(items, fc.integer(), (pairs, turn) => {
				const list = pairs.map(([value, u], i) => uncertain(value, u, source(String(i))));
				const at = Math.abs(turn) % list.length;
				const turned = [...list.slice(at), ...list.slice(0, at)].reverse();
				for (const operation of [minimum, maximum, mean]) {
					const [one, other] = [operation(list), operation(turned)];
					expect(other.value).toBeCloseTo(one.value, 13);
					expect(standardUncertainty(other) / standardUncertainty(one)).toBeCloseTo(1, 12);
				}
			}),
			{ seed: 310 }
		);
	});
});

describe('differences of temperature', () => {
	const celsius = parseUnit('degC');
	const rise = subtract(exactly(25, celsius), exactly(20, celsius));

	it('cannot be told on a scale, however they were scaled', () => {
		const kinds: Quantity[] = [
			rise,
			multiply(plainNumber(2), rise),
			divide(rise, plainNumber(3)),
			add(rise, rise),
			mean([rise, rise]),
			standardDeviation([exactly(20, celsius), exactly(25, celsius)]),
			uncertaintyOf(uncertain(20, 0.1, source('t'), 'degC'))
		];
		for (const each of kinds) {
			expect(() => toldIn(each, celsius)).toThrow(/a difference of temperatures. Tell it in kelvins/);
		}
		expect(() => thermodynamicTemperature(rise)).toThrow(/no thermodynamic temperature/);
	});

	it('move a point, and leave absolute temperatures alone', () => {
		expect(valueIn(toldIn(add(exactly(20, celsius), rise), celsius))).toBeCloseTo(25, 12);
		const absolute = divide(exactly(41, parseUnit('kJ')), exactly(0.11, parseUnit('kJ/K')));
		expect(valueIn(toldIn(absolute, celsius))).toBeCloseTo(41 / 0.11 - 273.15, 10);
	});

	it('are not compared with points', () => {
		expect(() => maximum([exactly(20, celsius), exactly(300, parseUnit('K'))])).toThrow(/kelvin\(t\)/);
	});
});
