import quantile from '@stdlib/stats-base-dists-t-quantile';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	add,
	budget,
	combinedUncertainty,
	covariance,
	coverageFactor,
	divide,
	elementary,
	exactly,
	exp,
	exponential,
	interpolate,
	ln,
	mean,
	multiply,
	naturalLogarithm,
	negate,
	parseUnit,
	plainNumber,
	pow,
	power,
	QuantityProblem,
	squareRoot,
	standardUncertainty,
	subtract,
	sum,
	thermodynamicTemperature,
	toldIn,
	valueIn,
	withDeviations,
	type Quantity,
	type Source
} from '$lib/quantities';

function source(label: string, degreesOfFreedom = Infinity): Source {
	return { component: { id: label, label, scope: 'reading', degreesOfFreedom } };
}

function uncertain(value: number, u: number, from = source('a'), unit = '1'): Quantity {
	const told = parseUnit(unit);
	return withDeviations(exactly(value, told), [[from, u * told.factor]]);
}

const values = fc.double({ min: -1e6, max: 1e6, noNaN: true }).filter((value) => Math.abs(value) > 1e-6);
const sizes = fc.double({ min: 1e-6, max: 1e3, noNaN: true });
const seed = 310;

describe('linear parts', () => {
	it('makes x - x and x / x exact', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(values, sizes, (value, u) => {
				const x = uncertain(value, u);
				expect(subtract(x, x)).toMatchObject({ value: 0 });
				expect(subtract(x, x).parts.size).toBe(0);
				expect(divide(x, x).value).toBe(1);
				expect(standardUncertainty(divide(x, x))).toBeLessThan(1e-15 * (u / Math.abs(value)));
			}),
			{ seed }
		);
	});

	it('does not care about the order of terms and factors', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(values, sizes, values, sizes, values, (a, ua, b, ub, c) => {
				const [x, y, z] = [uncertain(a, ua), uncertain(b, ub, source('b')), plainNumber(c)];
				expect(standardUncertainty(add(x, y))).toBeCloseTo(standardUncertainty(add(y, x)), 12);
				const left = multiply(multiply(x, y), z);
				const right = multiply(z, multiply(y, x));
				expect(left.value / right.value).toBeCloseTo(1, 13);
				expect(standardUncertainty(left) / standardUncertainty(right)).toBeCloseTo(1, 12);
			}),
			{ seed }
		);
	});

	it('gives the same in whatever unit the inputs were told', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(fc.double({ min: 50, max: 800, noNaN: true }), sizes, (torr, u) => {
				const a = uncertain(torr, u, source('a'), 'torr');
				const b = uncertain(torr * (101325 / 760), u * (101325 / 760), source('a'), 'Pa');
				const log = (p: Quantity) => ln(divide(p, exactly(1, parseUnit('Pa'))));
				expect(log(a).value).toBeCloseTo(log(b).value, 13);
				expect(standardUncertainty(log(a)) / standardUncertainty(log(b))).toBeCloseTo(1, 12);
				expect(valueIn(toldIn(b, parseUnit('torr')))).toBeCloseTo(torr, 9);
			}),
			{ seed }
		);
	});

	/** Derivatives against central differences of the plain functions. */
	it.each<[string, (x: Quantity) => Quantity, (x: number) => number]>([
		['ln', ln, Math.log],
		['exp', exp, Math.exp],
		['square root', squareRoot, Math.sqrt],
		['cube', (x) => power(x, plainNumber(3)), (x) => x ** 3],
		['broken power', (x) => power(x, plainNumber(-1.7)), (x) => x ** -1.7],
		['power of two', (x) => power(plainNumber(2), x), (x) => 2 ** x],
		['negation', negate, (x) => -x],
		['reciprocal', (x) => divide(plainNumber(1), x), (x) => 1 / x],
		['straight pieces', (x) => interpolate(x, [{ x: 0, y: 1 }, { x: 2, y: 5 }, { x: 9, y: 6 }], plainNumber(1).dimension), (x) => 1 + 2 * x] // prettier-ignore
	])('%s has the right derivative', (_, operation, plain) => {
		for (const at of [0.3, 1.1, 1.9]) {
			const h = 1e-5;
			const numeric = (plain(at + h) - plain(at - h)) / (2 * h);
			const result = operation(uncertain(at, 1));
			expect(result.value / plain(at)).toBeCloseTo(1, 12);
			expect(([...result.parts.values()][0] ?? NaN) / numeric).toBeCloseTo(1, 7);
		}
	});

	it('keeps a shared source shared through a mean, and halves independent ones', () => {
		const offset = source('offset');
		const rows = [1, 2, 3, 4].map((value) =>
			withDeviations(uncertain(value, 0.1, source('noise')), [[offset, 0.2]])
		);
		expect(standardUncertainty(mean(rows))).toBeCloseTo(Math.hypot(0.1 / 2, 0.2), 14);
		expect(standardUncertainty(sum(rows))).toBeCloseTo(Math.hypot(0.2, 0.8), 14);
		expect(covariance(rows[0] ?? plainNumber(0), rows[1] ?? plainNumber(0))).toBeCloseTo(0.04, 15);
	});

	it('counts one variance estimate once', () => {
		const scatter = { id: 's', label: 's', scope: 'run', degreesOfFreedom: 8 } as const;
		const both = withDeviations(plainNumber(1), [
			[{ component: scatter }, 0.3],
			[{ component: scatter }, 0.4]
		]);
		expect(combinedUncertainty(both)).toEqual({ standard: 0.5, degreesOfFreedom: 8 });
		// GUM G.4.1 by hand: u = 0.5 and 0.5 with 4 and infinity degrees of freedom give 16
		const mixed = withDeviations(plainNumber(1), [
			[source('a', 4), 0.5],
			[source('b'), 0.5]
		]);
		expect(combinedUncertainty(mixed).degreesOfFreedom).toBeCloseTo(16, 12);
		expect(budget(mixed).map(({ share }) => share)).toEqual([0.5, 0.5]);
	});
});

describe('dimensions and temperatures', () => {
	const celsius = parseUnit('degC');

	it('says both sides of what does not fit', () => {
		const pressure = exactly(1, parseUnit('Pa'));
		const temperature = exactly(1, parseUnit('K'));
		expect(() => toldIn(temperature, pressure.unit)).toThrow('Pressure wanted; this is a temperature.');
		expect(() => add(pressure, temperature)).toThrow('A pressure and a temperature cannot be added.');
		expect(() => ln(pressure)).toThrow(/A logarithm wants a number without unit; this is a pressure/);
	});

	it('tells points and differences of temperature apart', () => {
		const [cold, warm] = [exactly(20, celsius), exactly(25, celsius)];
		expect(valueIn(subtract(warm, cold))).toBeCloseTo(5, 12);
		expect(subtract(warm, cold)).toMatchObject({ point: false, unit: parseUnit('K') });
		expect(() => add(cold, warm)).toThrow(/no sum/);
		expect(() => sum([cold, warm])).toThrow(/mean, but no sum/);
		expect(valueIn(mean([cold, warm]))).toBeCloseTo(22.5, 12);
		const risen = add(cold, exactly(5, parseUnit('K')));
		expect(valueIn(risen)).toBeCloseTo(25, 12);
		expect(risen.point).toBe(true);
		expect(valueIn(thermodynamicTemperature(warm))).toBe(298.15);
	});

	it.each<[string, () => Quantity]>([
		['logarithm of zero', () => ln(plainNumber(0))],
		['division by zero', () => divide(plainNumber(1), plainNumber(0))],
		['root of a negative number', () => squareRoot(plainNumber(-1))],
		['broken power of a negative number', () => power(plainNumber(-1), plainNumber(0.5))],
		['overflow', () => exp(plainNumber(1000))],
		['mean of nothing', () => mean([])]
	])('refuses the %s in words', (_, operation) => {
		expect(operation).toThrow(QuantityProblem);
	});
});

describe("Student's t", () => {
	it('agrees with an independent library from half a degree of freedom to a million', () => {
		let worst = 0;
		for (const coverage of [0.5, 0.6827, 0.9, 0.95, 0.99, 0.999]) {
			for (let nu = 0.5; nu < 1e6; nu *= 1.31) {
				worst = Math.max(
					worst,
					Math.abs(coverageFactor(coverage, nu) / quantile(1 - (1 - coverage) / 2, nu) - 1)
				);
			}
		}
		expect(worst).toBeLessThan(1e-11);
	});

	it('ends in the normal quantile', () => {
		// Phi^-1(0.975) to 16 digits, Abramowitz and Stegun table 26.5 continued (from memory)
		expect(coverageFactor(0.95, Infinity)).toBeCloseTo(1.959963984540054, 11);
	});
});

describe('elementary functions', () => {
	it('are within a unit in the last place or two of the engine', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(fc.double({ min: 1e-300, max: 1e300, noNaN: true }), (x) => {
				expect(Math.abs(naturalLogarithm(x) - Math.log(x))).toBeLessThanOrEqual(
					2.3e-16 * Math.abs(Math.log(x))
				);
				const y = Math.log(x);
				expect(Math.abs(exponential(y) / Math.exp(y) - 1)).toBeLessThan(5e-16);
				expect(Math.abs(pow(x, 0.3) / x ** 0.3 - 1)).toBeLessThan(5e-16);
			}),
			{ numRuns: 2000, seed }
		);
	});

	it.each<[string, (x: number) => number, (x: number) => number, number, number]>([
		['log10', elementary.log10, Math.log10, 1e-300, 1e300],
		['sin', elementary.sin, Math.sin, -50, 50],
		['cos', elementary.cos, Math.cos, -50, 50],
		['tan', elementary.tan, Math.tan, -50, 50],
		['asin', elementary.asin, Math.asin, -1, 1],
		['acos', elementary.acos, Math.acos, -1, 1],
		['atan', elementary.atan, Math.atan, -1e6, 1e6]
	])('%s too', (_, ours, engine, min, max) => {
		fc.assert(
			fc.property(fc.double({ min, max, noNaN: true }), (x) => {
				expect(Math.abs(ours(x) - engine(x))).toBeLessThanOrEqual(4.5e-16 * Math.abs(engine(x)));
			}),
			{ numRuns: 2000, seed }
		);
	});

	it('gives whole numbers as the logarithms of the powers of ten', () => {
		for (let n = -300; n <= 300; n += 1) expect(elementary.log10(Number(`1e${n}`))).toBe(n);
	});
});
