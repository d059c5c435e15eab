import { describe, expect, it } from 'vitest';
import {
	covarianceFrom,
	coverageFactor,
	draw,
	elementary,
	independent,
	jointlyNormal,
	monteCarlo,
	QuantityProblem,
	randomSource,
	standardDeviationOf,
	Xoshiro128,
	type Distribution
} from '$lib/quantities';

describe('numbers drawn at random', () => {
	it('are those of the published generator', () => {
		// first outputs of xoshiro128** from the state 1, 2, 3, 4, as the authors' C program gives them
		const generator = new Xoshiro128([1, 2, 3, 4]);
		expect(Array.from({ length: 10 }, () => generator.next())).toEqual([
			11520, 0, 5927040, 70819200, 2031721883, 1637235492, 1287239034, 3734860849, 3729100597, 4258142804
		]);
		expect(() => new Xoshiro128([0, 0, 0, 0])).toThrow(RangeError);
	});

	it('repeat with their seed, differ without', () => {
		const some = (seed: number) => {
			const random = randomSource(seed);
			return Array.from({ length: 5 }, () => random.normal());
		};
		expect(some(7)).toEqual(some(7));
		expect(some(7)).not.toEqual(some(8));
	});

	it('lie evenly between 0 and 1', () => {
		const random = randomSource(1);
		const bins = new Array<number>(100).fill(0);
		for (let i = 0; i < 100_000; i += 1) {
			const x = random.uniform();
			if (!(x > 0 && x < 1)) throw new Error(String(x));
			bins[Math.floor(100 * x)] = (bins[Math.floor(100 * x)] ?? 0) + 1;
		}
		const chiSquared = bins.reduce((sum, n) => sum + (n - 1000) ** 2 / 1000, 0);
		// 99 degrees of freedom: 0.1 % of runs lie above 148
		expect(chiSquared).toBeLessThan(148);
	});
});

describe('distributions', () => {
	it.each<Distribution>([
		{ shape: 'normal', mean: 3, standard: 2 },
		{ shape: 'rectangular', low: 1, high: 5 },
		{ shape: 'triangular', low: 1, high: 5 },
		{ shape: 'trapezoidal', low: 1, high: 5, ratio: 0.4 },
		{ shape: 'curvilinear-trapezoidal', low: 1, high: 5, wander: 0.5 },
		{ shape: 'arcsine', low: 1, high: 5 },
		{ shape: 'student', mean: 3, scale: 2, degreesOfFreedom: 9.5 },
		{ shape: 'student', mean: 3, scale: 2, degreesOfFreedom: Infinity }
	])('$shape has its mean and its standard deviation', (distribution) => {
		const random = randomSource(42);
		const n = 100_000;
		const values = Array.from({ length: n }, () => draw(distribution, random));
		const mean = values.reduce((sum, x) => sum + x, 0) / n;
		const s = Math.sqrt(values.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (n - 1));
		const u = standardDeviationOf(distribution);
		// five standard errors; the kurtosis of none of these makes that of s more than one per cent
		expect(Math.abs(mean - 3)).toBeLessThan((5 * u) / Math.sqrt(n));
		expect(Math.abs(s / u - 1)).toBeLessThan(0.02);
		const { low, high } = 'low' in distribution ? distribution : { low: -Infinity, high: Infinity };
		const slack = distribution.shape === 'curvilinear-trapezoidal' ? distribution.wander : 0;
		expect(values.every((x) => x >= low - slack && x <= high + slack)).toBe(true);
	});

	it('of t with few degrees of freedom have its heavy tails', () => {
		const random = randomSource(5);
		const n = 50_000;
		for (const degreesOfFreedom of [0.5, 1, 3, 18.4]) {
			const t = coverageFactor(0.95, degreesOfFreedom);
			let outside = 0;
			for (let i = 0; i < n; i += 1) {
				if (Math.abs(draw({ shape: 'student', mean: 0, scale: 1, degreesOfFreedom }, random)) > t)
					outside += 1;
			}
			expect(Math.abs(outside / n - 0.05)).toBeLessThan(0.005);
		}
	});

	it.each<Distribution>([
		{ shape: 'rectangular', low: 2, high: 1 },
		{ shape: 'normal', mean: NaN, standard: 1 },
		{ shape: 'normal', mean: 0, standard: -1 },
		{ shape: 'student', mean: 0, scale: 1, degreesOfFreedom: 0 },
		{ shape: 'trapezoidal', low: 0, high: 1, ratio: 2 },
		{ shape: 'curvilinear-trapezoidal', low: 0, high: 1, wander: 0.6 }
	])('that cannot be are refused: $shape', (distribution) => {
		expect(() => independent([distribution])).toThrow(QuantityProblem);
	});
});

describe('Monte Carlo', () => {
	const normal: Distribution = { shape: 'normal', mean: 0, standard: 1 };

	it('is the same to the last bit for the same seed', () => {
		const run = () =>
			monteCarlo(([a = NaN, b = NaN]) => a * b, independent([normal, normal]), { seed: 9, trials: 2000 });
		expect(run()).toEqual(run());
	});

	it('finds the shortest interval of a skewed result', () => {
		// exponential with mean 1: the shortest 95 % run from 0 to -ln 0.05, the symmetric ones from -ln 0.975 to -ln 0.025
		const model = ([x = NaN]: readonly number[]) => -elementary.ln(x);
		const sampler = independent([{ shape: 'rectangular', low: 0, high: 1 }]);
		const { shortest, symmetric } = monteCarlo(model, sampler, { seed: 11, trials: 200_000 });
		expect(shortest.low).toBeLessThan(0.002);
		expect(shortest.high).toBeCloseTo(2.9957, 1);
		expect(symmetric.low).toBeCloseTo(0.0253, 2);
		expect(symmetric.high).toBeCloseTo(3.6889, 1);
	});

	it('draws correlated inputs together', () => {
		const covariances = covarianceFrom([2, 3], [[1, -0.6], [-0.6, 1]]); // prettier-ignore
		const model = ([a = NaN, b = NaN]: readonly number[]) => a + b;
		const { mean, standardUncertainty } = monteCarlo(model, jointlyNormal([10, 20], covariances), {
			seed: 3,
			trials: 100_000
		});
		expect(Math.abs(mean - 30)).toBeLessThan(0.05);
		// var = 4 + 9 - 2 * 0.6 * 6
		expect(Math.abs(standardUncertainty / Math.sqrt(5.8) - 1)).toBeLessThan(0.012);
	});

	it('stops by itself when its digits stand, and says when they do not', () => {
		const model = ([a = NaN, b = NaN]: readonly number[]) => a + b;
		const settled = monteCarlo(model, independent([normal, normal]), {
			seed: 1,
			trials: 'adaptive',
			digits: 1
		});
		expect(settled.settled).toBe(true);
		expect(settled.standardUncertainty).toBeCloseTo(Math.SQRT2, 1);
		const short = monteCarlo(model, independent([normal, normal]), {
			seed: 1,
			trials: 'adaptive',
			mostTrials: 20_000
		});
		expect(short).toMatchObject({ settled: false, trials: 20_000 });
	});

	it('refuses a model without a value somewhere', () => {
		const model = ([a = NaN]: readonly number[]) => elementary.ln(a);
		expect(() => monteCarlo(model, independent([normal]), { seed: 1, trials: 100 })).toThrow(
			/not a finite number/
		);
	});
});
