import { describe, expect, it } from 'vitest';
import {
	add,
	covarianceFrom,
	coverageFactor,
	divide,
	elementary,
	independent,
	jointlyNormal,
	ln,
	monteCarlo,
	multiply,
	plainNumber,
	power,
	standardUncertainty,
	subtract,
	type Distribution
} from '$lib/quantities';
import { input, rectangular } from './uncertain-inputs';

/** JCGM 101:2008, clause 9. Tolerances are the last digit printed, or five standard errors of the trials where these are larger. */

const total = (inputs: readonly number[]) => inputs.reduce((sum, each) => sum + each, 0);
const trials = 400_000;

function rectangle(standard: number): Distribution {
	const half = standard * Math.sqrt(3);
	return { shape: 'rectangular', low: -half, high: half };
}

describe('9.2, sum of four', () => {
	it.each<[string, Distribution[], number, number]>([
		['9.2.2 normal', Array.from({ length: 4 }, () => ({ shape: 'normal', mean: 0, standard: 1 })), 2, 3.92],
		// exact: 2 sqrt(3) (2 - (3/5)^(1/4)) = 3.8794
		['9.2.3 rectangular', Array.from({ length: 4 }, () => rectangle(1)), 2, 3.88],
		[
			'9.2.4 one of them ten times as wide',
			[rectangle(1), rectangle(1), rectangle(1), rectangle(10)],
			Math.sqrt(103),
			17
		]
	])('%s', (_, distributions, u, half) => {
		const result = monteCarlo(total, independent(distributions), { seed: 101, trials });
		expect(Math.abs(result.mean)).toBeLessThan((5 * u) / Math.sqrt(trials));
		expect(Math.abs(result.standardUncertainty / u - 1)).toBeLessThan(0.005);
		const { shortest, symmetric } = result;
		const error = half * 0.006;
		expect(Math.abs(symmetric.low + half)).toBeLessThan(error);
		expect(Math.abs(symmetric.high - half)).toBeLessThan(error);
		// where the density is flat at its middle the shortest interval may lie a little aside, but not be longer
		expect(shortest.high - shortest.low).toBeLessThanOrEqual(symmetric.high - symmetric.low);
		expect(Math.abs(shortest.high - shortest.low - 2 * half)).toBeLessThan(2 * error);
	});

	it('9.2.4: the normal approximation is too wide, 19.9', () => {
		const u = Math.sqrt(103);
		expect(u).toBeCloseTo(10.1, 1);
		expect(coverageFactor(0.95, Infinity) * u).toBeCloseTo(19.9, 1);
	});

	it('settles by itself to two digits', () => {
		const four = Array.from({ length: 4 }, (): Distribution => ({ shape: 'normal', mean: 0, standard: 1 }));
		const result = monteCarlo(total, independent(four), {
			seed: 7,
			trials: 'adaptive',
			mostTrials: 2e6,
			digits: 1
		});
		expect(result.settled).toBe(true);
		expect(Math.abs(result.standardUncertainty - 2)).toBeLessThan(0.05);
	});
});

describe('9.3, mass calibration', () => {
	// mg, kg/m3; dm = (mRc + dmRc) (1 + (ra - 1.2) (1/rW - 1/rR)) - 100 g
	const nominal = 100_000;

	it('linear propagation gives 1.234 and 0.0539, as printed', () => {
		const [mRc, dmRc] = [input(100_000, 0.05), input(1.234, 0.02)];
		const [ra, rW, rR] = [
			input(1.2, rectangular(0.1)),
			input(8000, rectangular(1000)),
			input(8000, rectangular(50))
		];
		const reciprocals = subtract(divide(plainNumber(1), rW), divide(plainNumber(1), rR));
		const buoyancy = add(plainNumber(1), multiply(subtract(ra, plainNumber(1.2)), reciprocals));
		const result = subtract(multiply(add(mRc, dmRc), buoyancy), plainNumber(nominal));
		expect(result.value).toBeCloseTo(1.234, 9);
		expect(standardUncertainty(result)).toBeCloseTo(0.0539, 4);
		expect(1.234 - coverageFactor(0.95, Infinity) * standardUncertainty(result)).toBeCloseTo(1.1285, 4);
	});

	it('Monte Carlo gives the larger uncertainty that the second derivatives make', () => {
		const model = ([mRc = NaN, dmRc = NaN, ra = NaN, rW = NaN, rR = NaN]: readonly number[]) =>
			// the difference to the nominal mass first: the sum would lose its last digits
			mRc - nominal + dmRc + (mRc + dmRc) * (ra - 1.2) * (1 / rW - 1 / rR);
		const result = monteCarlo(
			model,
			independent([
				{ shape: 'normal', mean: nominal, standard: 0.05 },
				{ shape: 'normal', mean: 1.234, standard: 0.02 },
				{ shape: 'rectangular', low: 1.1, high: 1.3 },
				{ shape: 'rectangular', low: 7000, high: 9000 },
				{ shape: 'rectangular', low: 7950, high: 8050 }
			]),
			{ seed: 93, trials }
		);
		expect(Math.abs(result.mean - 1.234)).toBeLessThan((5 * 0.0755) / Math.sqrt(trials));
		// closed form 0.07548, printed 0.0754
		expect(Math.abs(result.standardUncertainty - 0.07547974)).toBeLessThan(5e-4);
		// printed 1.0834 and 1.3825 (from memory)
		expect(Math.abs(result.shortest.low - 1.0834)).toBeLessThan(0.006);
		expect(Math.abs(result.shortest.high - 1.3825)).toBeLessThan(0.006);
	});
});

describe('9.4, comparison loss', () => {
	// dY = X1^2 + X2^2, x2 = 0, u = 0.005; mean x1^2 + 2 u^2 and variance 4 x1^2 u^2 + 4 u^4 (1 + r^2) are exact
	const u = 0.005;
	const two = plainNumber(2);

	it.each([
		[0, 0, 50e-6, 50e-6],
		[0.01, 0, 150e-6, 111.803e-6],
		[0.05, 0, 2550e-6, 502.494e-6],
		[0, 0.9, 50e-6, 67.268e-6],
		// printed 121e-6
		[0.01, 0.9, 150e-6, 120.52e-6],
		[0.05, 0.9, 2550e-6, 504.505e-6]
	])('x1 = %d, r = %d', (x1, r, mean, standard) => {
		const covariances = covarianceFrom([u, u], [[1, r], [r, 1]]); // prettier-ignore
		const model = ([a = NaN, b = NaN]: readonly number[]) => a * a + b * b;
		const result = monteCarlo(model, jointlyNormal([x1, 0], covariances), { seed: 94, trials });
		expect(Math.abs(result.mean - mean)).toBeLessThan((5 * standard) / Math.sqrt(trials));
		expect(Math.abs(result.standardUncertainty / standard - 1)).toBeLessThan(0.02);
		// linear propagation knows the first derivative only: nothing at x1 = 0
		const linear = add(power(input(x1, u), two), power(input(0, u), two));
		expect(standardUncertainty(linear)).toBeCloseTo(2 * x1 * u, 12);
	});

	it('x1 = 0, r = 0: the interval begins at the edge of what is possible', () => {
		const covariances = covarianceFrom([u, u], [[1, 0], [0, 1]]); // prettier-ignore
		const model = ([a = NaN, b = NaN]: readonly number[]) => a * a + b * b;
		const { shortest } = monteCarlo(model, jointlyNormal([0, 0], covariances), { seed: 95, trials });
		// exponential with mean 50e-6: the shortest 95 % end at -50e-6 ln 0.05
		expect(shortest.low).toBeGreaterThan(0);
		expect(shortest.low).toBeLessThan(1e-7);
		expect(Math.abs(shortest.high / (-50e-6 * Math.log(0.05)) - 1)).toBeLessThan(0.01);
	});
});

describe('9.5, gauge block', () => {
	// nm; the nominal length is taken off at once
	const distributions: Distribution[] = [
		{ shape: 'student', mean: 623, scale: 25, degreesOfFreedom: 18 },
		{ shape: 'student', mean: 215, scale: 6, degreesOfFreedom: 24 },
		{ shape: 'student', mean: 0, scale: 4, degreesOfFreedom: 5 },
		{ shape: 'student', mean: 0, scale: 7, degreesOfFreedom: 8 },
		{ shape: 'rectangular', low: 9.5e-6, high: 13.5e-6 },
		{ shape: 'normal', mean: -0.1, standard: 0.2 },
		{ shape: 'arcsine', low: -0.5, high: 0.5 },
		{ shape: 'curvilinear-trapezoidal', low: -1e-6, high: 1e-6, wander: 0.1e-6 },
		{ shape: 'curvilinear-trapezoidal', low: -0.05, high: 0.05, wander: 0.025 }
	];
	const model = ([ls = NaN, d = NaN, d1 = NaN, d2 = NaN, alpha = NaN, theta0 = NaN, cycle = NaN, dAlpha = NaN, dTheta = NaN]: readonly number[]) =>
		ls + d + d1 + d2 - (50e6 + ls) * (dAlpha * (theta0 + cycle) + alpha * dTheta); // prettier-ignore

	it('gives the published 838, 36 and the interval 745 to 932 at 99 %', () => {
		const result = monteCarlo(model, independent(distributions), { seed: 959, trials, coverage: 0.99 });
		expect(Math.abs(result.mean - 838)).toBeLessThan(0.5);
		expect(Math.round(result.standardUncertainty)).toBe(36);
		expect(Math.abs(result.standardUncertainty - 35.82)).toBeLessThan(0.3);
		// the ends from memory, 744.7 and 932.3 by another generator's four million trials
		expect(Math.abs(result.shortest.low - 745)).toBeLessThan(2);
		expect(Math.abs(result.shortest.high - 932)).toBeLessThan(2);
		expect(Math.abs(result.symmetric.low - 744.2)).toBeLessThan(1.5);
		expect(Math.abs(result.symmetric.high - 931.8)).toBeLessThan(1.5);
	});
});

describe('NPL report DEM-ES-011, 9.2: the logarithm of a rectangular input', () => {
	it('linear: -0.511 and 0.481; Monte Carlo: -0.665, 0.606, -1.895 to 0.095', () => {
		const linear = ln(input(0.6, rectangular(0.5)));
		expect(linear.value).toBeCloseTo(-0.511, 3);
		expect(standardUncertainty(linear)).toBeCloseTo(0.481, 3);
		const model = ([x = NaN]: readonly number[]) => elementary.ln(x);
		const result = monteCarlo(model, independent([{ shape: 'rectangular', low: 0.1, high: 1.1 }]), {
			seed: 11,
			trials
		});
		expect(Math.abs(result.mean + 0.665)).toBeLessThan(0.005);
		expect(Math.abs(result.standardUncertainty - 0.606)).toBeLessThan(0.005);
		expect(Math.abs(result.shortest.low + 1.895)).toBeLessThan(0.01);
		expect(Math.abs(result.shortest.high - 0.095)).toBeLessThan(0.005);
	});
});
