import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	combinedUncertainty,
	covariance,
	plainNumber,
	standardUncertainty,
	withDeviations,
	type Quantity,
	type Scope,
	type Source
} from '$lib/quantities';
import { fitLine, FitProblem, inversePrediction, lineAt, type LineOptions } from '$lib/regression';

const scatter: LineOptions = { id: 'line', scatterLabel: 'Scatter', policy: 'scatter', weights: 'equal' };
const stated: LineOptions = { ...scatter, policy: 'stated', weights: 'stated' };
const source = (scope: Scope): Source => ({
	component: { id: scope, label: scope, scope, degreesOfFreedom: Infinity }
});
const xs = [1, 2, 3, 4, 5, 6];
const ys = [2.1, 3.9, 6.2, 7.8, 10.1, 11.9];
const exact = (values: readonly number[]) => values.map(plainNumber);
const noisy = (values: readonly number[], u: number | readonly number[]): Quantity[] =>
	values.map((value, i) =>
		withDeviations(plainNumber(value), [[source('reading'), typeof u === 'number' ? u : (u[i] ?? 0)]])
	);

/** Textbook sums (not centred), as another way to the same numbers. */
function textbook(x: readonly number[], y: readonly number[], w: readonly number[]) {
	const total = (f: (i: number) => number) => x.reduce((sum, _, i) => sum + f(i), 0);
	const [s, sx, sy] = [
		total((i) => w[i] ?? 0),
		total((i) => (w[i] ?? 0) * (x[i] ?? 0)),
		total((i) => (w[i] ?? 0) * (y[i] ?? 0))
	];
	const [sxx, sxy] = [
		total((i) => (w[i] ?? 0) * (x[i] ?? 0) ** 2),
		total((i) => (w[i] ?? 0) * (x[i] ?? 0) * (y[i] ?? 0))
	];
	const d = s * sxx - sx * sx;
	const slope = (s * sxy - sx * sy) / d;
	const intercept = (sxx * sy - sx * sxy) / d;
	const chi = total((i) => (w[i] ?? 0) * ((y[i] ?? 0) - intercept - slope * (x[i] ?? 0)) ** 2);
	return { slope, intercept, varSlope: s / d, varIntercept: sxx / d, cov: -sx / d, chi };
}

describe('straight line', () => {
	it('gives parameters, standard deviations and covariance of the textbook', () => {
		const fit = fitLine(exact(xs), exact(ys), scatter);
		const expected = textbook(xs, ys, xs.map(() => 1)); // prettier-ignore
		const s2 = expected.chi / 4;
		expect(fit.slope.value).toBeCloseTo(expected.slope, 12);
		expect(fit.intercept.value).toBeCloseTo(expected.intercept, 12);
		expect(standardUncertainty(fit.slope)).toBeCloseTo(Math.sqrt(s2 * expected.varSlope), 12);
		expect(standardUncertainty(fit.intercept)).toBeCloseTo(Math.sqrt(s2 * expected.varIntercept), 12);
		expect(covariance(fit.slope, fit.intercept)).toBeCloseTo(s2 * expected.cov, 12);
		expect(fit.residualStandardDeviation).toBeCloseTo(Math.sqrt(s2), 12);
		expect(combinedUncertainty(fit.slope).degreesOfFreedom).toBe(4);
	});

	it('weights by stated uncertainty and tells chi-squared', () => {
		const u = [0.1, 0.2, 0.1, 0.3, 0.2, 0.1];
		const fit = fitLine(exact(xs), noisy(ys, u), stated);
		const expected = textbook(xs, ys, u.map((size) => 1 / size ** 2)); // prettier-ignore
		expect(fit.slope.value).toBeCloseTo(expected.slope, 12);
		expect(standardUncertainty(fit.slope)).toBeCloseTo(Math.sqrt(expected.varSlope), 12);
		expect(covariance(fit.slope, fit.intercept)).toBeCloseTo(expected.cov, 12);
		expect(fit.chiSquared).toBeCloseTo(expected.chi, 10);
		expect(combinedUncertainty(fit.slope).degreesOfFreedom).toBe(Infinity);
	});

	it('replaces the reading-scope parts by the scatter, and keeps the shared ones', () => {
		const bare = fitLine(exact(xs), exact(ys), scatter);
		const withNoise = fitLine(noisy(xs, 0.5), noisy(ys, 0.5), scatter);
		expect(standardUncertainty(withNoise.slope)).toBe(standardUncertainty(bare.slope));
		const offset = source('instrument');
		const shifted = fitLine(exact(xs), ys.map((value) => withDeviations(plainNumber(value), [[offset, 0.3]])), scatter); // prettier-ignore
		expect(shifted.slope.parts.get(offset) ?? 0).toBeCloseTo(0, 14);
		expect(shifted.intercept.parts.get(offset)).toBeCloseTo(0.3, 14);
	});

	it('has the derivatives of slope and intercept towards every reading of both axes', () => {
		const at = (x: readonly number[], y: readonly number[]) => fitLine(exact(x), exact(y), scatter);
		const h = 1e-6;
		for (let i = 0; i < xs.length; i += 1) {
			for (const axis of ['x', 'y'] as const) {
				const probe = source('instrument');
				const marked = (values: readonly number[]) =>
					values.map((value, j) =>
						j === i ? withDeviations(plainNumber(value), [[probe, 1]]) : plainNumber(value)
					);
				const fit =
					axis === 'x' ? fitLine(marked(xs), exact(ys), scatter) : fitLine(exact(xs), marked(ys), scatter);
				const moved = (by: number) => {
					const shift = (values: readonly number[]) =>
						values.map((value, j) => (j === i ? value + by : value));
					return axis === 'x' ? at(shift(xs), ys) : at(xs, shift(ys));
				};
				const numeric = (of: 'slope' | 'intercept') => (moved(h)[of].value - moved(-h)[of].value) / (2 * h);
				expect(fit.slope.parts.get(probe) ?? 0).toBeCloseTo(numeric('slope'), 7);
				expect(fit.intercept.parts.get(probe) ?? 0).toBeCloseTo(numeric('intercept'), 7);
			}
		}
	});

	it('does not depend on the order of the points', () => {
		const points = fc.array(
			fc.tuple(
				fc.double({ min: -100, max: 100, noNaN: true }),
				fc.double({ min: -100, max: 100, noNaN: true })
			),
			{ minLength: 3, maxLength: 20 }
		);
		fc.assert(
			fc.property(
				points.filter((list) => Math.max(...list.map(([x]) => x)) - Math.min(...list.map(([x]) => x)) > 1),
				(list) => {
					const fit = (order: typeof list) =>
						fitLine(exact(order.map(([x]) => x)), exact(order.map(([, y]) => y)), scatter);
					const [there, back] = [fit(list), fit([...list].reverse())];
					expect(back.slope.value).toBeCloseTo(there.slope.value, 9);
					expect(standardUncertainty(back.slope)).toBeCloseTo(standardUncertainty(there.slope), 9);
				}
			),
			{ seed: 310 }
		);
	});

	it('tells the band from height and slope, and where the line reaches a height', () => {
		const fit = fitLine(exact(xs), exact(ys), scatter);
		const at = lineAt(fit);
		const expected = textbook(xs, ys, xs.map(() => 1)); // prettier-ignore
		const s2 = expected.chi / 4;
		for (const x of [0, 3.5, 9]) {
			const size = s2 * (expected.varIntercept + 2 * x * expected.cov + x * x * expected.varSlope);
			expect(at(x).standard).toBeCloseTo(Math.sqrt(size), 12);
			expect(at(x).degreesOfFreedom).toBe(4);
		}
		const reached = inversePrediction(fit, plainNumber(at(4.2).value));
		expect(reached.value).toBeCloseTo(4.2, 12);
		// first order: u(x) = u(line at x) / slope
		expect(standardUncertainty(reached)).toBeCloseTo(at(4.2).standard / Math.abs(fit.slope.value), 12);
	});

	it.each([
		[[], [], 'No points yet.'],
		[[1], [1], 'One point has no line. Add two.'],
		[[1, 2], [1, 2], 'Two points leave no scatter. Add one.'],
		[[2, 2, 2], [1, 2, 3], 'All points have the same x']
	])('says why %j has no line', (x, y, words) => {
		const attempt = () => fitLine(exact(x), exact(y), scatter);
		expect(attempt).toThrow(FitProblem);
		expect(attempt).toThrow(words);
	});

	it('wants stated uncertainties where it should weight by them', () => {
		expect(() => fitLine(exact(xs), exact(ys), stated)).toThrow(/wants an uncertainty for every reading/);
	});
});
