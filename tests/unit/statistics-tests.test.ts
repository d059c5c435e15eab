import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	budget,
	combinedUncertainty,
	coverageFactor,
	exactly,
	parseUnit,
	plainNumber,
	QuantityProblem,
	standardUncertainty,
	withDeviations,
	type Scope,
	type Source
} from '$lib/quantities';
import {
	analyseVariance,
	autocorrelation,
	binsWanted,
	combineQuantities,
	compareScatter,
	deviationsOfTyped,
	durbinWatson,
	fewestToTell,
	mean,
	meanAgainst,
	meanInterval,
	meansOfOwnScatter,
	meansOfSameScatter,
	median,
	pairedMeans,
	pooledStandardDeviation,
	randomEffectsMean,
	residualNormality,
	standardDeviation,
	weightedMean
} from '$lib/statistics';

const seed = 310;

/** Numbers that look random and are the same every time (Park and Miller's generator). */
function generator(start: number): () => number {
	let state = start;
	return () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
}

/** Standard normal deviates by the polar method. */
function normalDeviates(count: number, random: () => number): number[] {
	const values: number[] = [];
	while (values.length < count) {
		const [a, b] = [2 * random() - 1, 2 * random() - 1];
		const s = a * a + b * b;
		if (s > 0 && s < 1) values.push(a * Math.sqrt((-2 * Math.log(s)) / s));
	}
	return values;
}

describe('numbers as typed', () => {
	it('are subtracted in decimals', () => {
		const { origin, deviations } = deviationsOfTyped(['1000000000000.4', '1000000000000.3', '1e12']);
		expect(origin).toBe(1000000000000.4);
		expect(deviations).toEqual([0, -0.1, -0.4]);
		expect(deviationsOfTyped(['25.30', '.30', '-1.5e1', '+2.']).deviations).toEqual([0, -25, -40.3, -23.3]);
		expect(deviationsOfTyped([])).toEqual({ origin: NaN, deviations: [] });
	});

	it('agree with doubles where these are exact, for any texts', () => {
		const text = fc.tuple(fc.integer({ min: -1e9, max: 1e9 }), fc.integer({ min: 0, max: 20 }));
		fc.assert(
			fc.property(fc.array(text, { minLength: 1, maxLength: 10 }), (list) => {
				// binary fractions written out in decimals are exact as doubles
				const values = list.map(([whole, places]) => whole / 2 ** places);
				const { deviations } = deviationsOfTyped(values.map((value) => value.toFixed(20)));
				deviations.forEach((d, i) => expect(d + 0).toBe((values[i] ?? NaN) - (values[0] ?? NaN) + 0));
			}),
			{ seed }
		);
	});

	it.each(['', '.', '1,5', 'abc', '1e9999', '0x10', '--1', 'Infinity'])('refuses “%s”', (text) => {
		expect(() => deviationsOfTyped([text])).toThrow(RangeError);
	});
});

describe('means and scatter', () => {
	it('pools the scatter of groups, each about its own mean', () => {
		// by hand: squares 2 and 8 over 1 + 2 degrees of freedom; a group of one adds nothing
		expect(pooledStandardDeviation([[1, 3], [2, 4, 6], [9], []])).toEqual({
			value: Math.sqrt(10 / 3),
			degreesOfFreedom: 3
		});
		expect(pooledStandardDeviation([[1], [2]]).value).toBeNaN();
		expect(median([5, 1, 2])).toBe(2);
		expect(median([])).toBeNaN();
	});

	it("gives the mean's interval by Student's t", () => {
		const values = [9.8, 10.2, 10.1, 9.9];
		const interval = meanInterval(values, 0.95);
		// t of 3 degrees of freedom at 95 %: 3.182446 (GUM table G.2: 3.18)
		const half = (3.182446 * standardDeviation(values)) / 2;
		expect(interval?.high).toBeCloseTo(10 + half, 6);
		expect(interval?.low).toBeCloseTo(10 - half, 6);
		expect(meanInterval([1], 0.95)).toBeNull();
	});

	it('covers the true mean as often as it says', () => {
		const random = generator(2026);
		let [covered, tested] = [0, 0];
		for (let i = 0; i < 10_000; i += 1) {
			const sample = normalDeviates(5, random);
			const interval = meanInterval(sample, 0.95);
			if (interval && interval.low < 0 && interval.high > 0) covered += 1;
			if ((meanAgainst(sample, 0)?.p ?? 1) < 0.05) tested += 1;
		}
		expect(covered / 10_000).toBeGreaterThan(0.94);
		expect(covered / 10_000).toBeLessThan(0.96);
		// the interval leaves out what the test refuses
		expect(tested).toBe(10_000 - covered);
	});

	it('has nothing to say of too few values', () => {
		expect(meanAgainst([1], 0)).toBeNull();
		expect(meansOfSameScatter([1], [2])).toBeNull();
		expect(meansOfSameScatter([], [1, 2])).toBeNull();
		expect(meansOfOwnScatter([1], [1, 2])).toBeNull();
		expect(compareScatter([1], [1, 2])).toBeNull();
		expect(compareScatter([1, 1], [2, 2])).toBeNull();
		expect(() => pairedMeans([1], [1, 2])).toThrow(RangeError);
		expect(meanAgainst([2, 2, 2], 2)).toMatchObject({ t: 0, p: 1, difference: 0 });
		expect(meanAgainst([2, 2, 2], 1)).toMatchObject({ p: 0, difference: 1 });
		expect(analyseVariance([[1, 2]])).toBeNull();
		expect(analyseVariance([[1], [2]])).toBeNull();
	});

	it('takes two tests for one where there are two groups: F is the square of t', () => {
		const [a, b] = [[1.1, 2.3, 2.9, 3.1], [2.4, 3.9, 4.4]] as const; // prettier-ignore
		const [t, anova] = [meansOfSameScatter(a, b), analyseVariance([a, b])];
		expect(anova?.f).toBeCloseTo((t?.t ?? NaN) ** 2, 10);
		expect(anova?.p).toBeCloseTo(t?.p ?? NaN, 12);
		// equal sizes n: (MSB - MSW) / n is the variance between groups
		const even = analyseVariance([[1, 2, 3], [4, 5, 6], [9, 8, 7]]); // prettier-ignore
		expect(even?.betweenDeviation).toBeCloseTo(Math.sqrt((27 - 1) / 3), 12);
	});
});

describe('weighted means', () => {
	const values = [10.1, 10.5, 9.6, 11.2];
	const u = [0.2, 0.3, 0.2, 0.4];

	it('weights by the stated uncertainty', () => {
		const result = weightedMean([1, 3], [1, 2]);
		// by hand: weights 1 and 1/4
		expect(result?.mean).toBeCloseTo(1.4, 14);
		expect(result?.standardError).toBeCloseTo(1 / Math.sqrt(1.25), 14);
		expect(result?.chiSquared).toBeCloseTo(0.16 + 2.56 / 4, 14);
		expect(result?.scaledError).toBeCloseTo(Math.sqrt(0.8 / 1.25), 14);
		expect(weightedMean([5], [1])).toMatchObject({ mean: 5, scaledError: null });
		expect(weightedMean([], [])).toBeNull();
		expect(weightedMean([1, 2], [1, 0])).toBeNull();
	});

	it('finds the between part that makes chi-squared n - 1 (Paule and Mandel)', () => {
		const effects = randomEffectsMean(values, u);
		if (!effects) throw new Error('No mean.');
		const chi = values.reduce((sum, value, i) => sum + (value - effects.mean) ** 2 / ((u[i] ?? NaN) ** 2 + effects.between ** 2), 0); // prettier-ignore
		expect(chi).toBeCloseTo(3, 12);
		expect(effects.weights.reduce((sum, w) => sum + w, 0)).toBeCloseTo(1, 14);
		expect(effects.degreesOfFreedom).toBe(3);
	});

	it('finds the moment estimate of DerSimonian and Laird', () => {
		const effects = randomEffectsMean(values, u, 'dersimonian-laird');
		const w = u.map((each) => 1 / each ** 2);
		const total = w.reduce((sum, each) => sum + each, 0);
		const centre = w.reduce((sum, each, i) => sum + each * (values[i] ?? NaN), 0) / total;
		const q = w.reduce((sum, each, i) => sum + each * ((values[i] ?? NaN) - centre) ** 2, 0);
		const between2 = (q - 3) / (total - w.reduce((sum, each) => sum + each * each, 0) / total);
		expect(effects?.q).toBeCloseTo(q, 10);
		expect((effects?.between ?? NaN) ** 2).toBeCloseTo(between2, 12);
		// equal uncertainties: both methods are the plain mean with between2 = s2 - u2
		for (const method of ['paule-mandel', 'dersimonian-laird'] as const) {
			const even = randomEffectsMean(values, values.map(() => 0.2), method); // prettier-ignore
			expect(even?.mean).toBeCloseTo(mean(values), 12);
			expect((even?.between ?? NaN) ** 2).toBeCloseTo(standardDeviation(values) ** 2 - 0.04, 10);
			expect(even?.standardError).toBeCloseTo(standardDeviation(values) / 2, 12);
		}
	});

	it('has no between part where values scatter less than they say', () => {
		expect(randomEffectsMean([1, 1.1, 0.9], [1, 1, 1])).toMatchObject({ between: 0 });
	});

	it('keeps what quantities share, and tells the between part as a component', () => {
		const source = (scope: Scope): Source => ({
			component: { id: scope, label: scope, scope, degreesOfFreedom: Infinity }
		});
		const barometer = source('session');
		const teams = values.map(
			(value, i) =>
			withDeviations(exactly(value, parseUnit('kJ/mol')), [[source('run'), (u[i] ?? NaN) * 1000], [barometer, 100]]) // prettier-ignore
		);
		const { mean: combined, effects } = combineQuantities(teams, { id: 'course', label: 'Between teams' });
		expect(combined.parts.get(barometer)).toBeCloseTo(100, 9);
		const between = budget(combined).find(({ component }) => component.id === 'course:between');
		expect(between?.component.degreesOfFreedom).toBe(3);
		const share = effects.weights.reduce((sum, w) => sum + w * w, 0);
		expect(between?.contribution).toBeCloseTo(effects.between * Math.sqrt(share), 9);
		expect(standardUncertainty(combined)).toBeGreaterThan(100);
		expect(combinedUncertainty(combined).degreesOfFreedom).toBeGreaterThan(3);
		expect(combined.unit).toBe(teams[0]?.unit);
		expect(() => combineQuantities([], { id: 'a', label: 'a' })).toThrow(QuantityProblem);
		expect(() => combineQuantities([plainNumber(1)], { id: 'a', label: 'a' })).toThrow(/wants an uncertainty/); // prettier-ignore
	});
});

describe('tests of residuals', () => {
	it('say that too few points tell nothing', () => {
		const few = Array.from({ length: fewestToTell - 1 }, (_, i) => i - 6.5);
		expect(durbinWatson(few)).toMatchObject({ verdict: 'too-few', p: null });
		expect(residualNormality(few)).toMatchObject({ verdict: 'too-few', p: null });
		expect(durbinWatson(few).sentence).toMatch(/too few points to tell/i);
		expect(durbinWatson([])).toMatchObject({ verdict: 'too-few', statistic: null });
	});

	it('see residuals that run together, and ones that alternate', () => {
		const bent = Array.from({ length: 30 }, (_, i) => (i - 14.5) ** 2 - 74.9);
		expect(durbinWatson(bent)).toMatchObject({ verdict: 'seen' });
		expect(durbinWatson(bent).sentence).toMatch(/run together/);
		const jumping = bent.map((_, i) => (i % 2 ? 1 : -1) * (1 + 0.1 * Math.sin(i)));
		expect(durbinWatson(jumping).sentence).toMatch(/alternate/);
		const far = [...normalDeviates(29, generator(5)), 12];
		expect(residualNormality(far)).toMatchObject({ verdict: 'seen' });
		expect(residualNormality(normalDeviates(60, generator(7)))).toMatchObject({ verdict: 'nothing-seen' });
	});

	it('lie between the bounds printed by Durbin and Watson', () => {
		// Durbin and Watson, Biometrika 38 (1951) 159, one regressor, 5 % one-sided, from memory: n = 15: 1.08 and 1.36;
		// n = 20: 1.20 and 1.41; n = 30: 1.35 and 1.49. A real design's point lies between them.
		for (const [n, low, high] of [
			[15, 1.08, 1.36],
			[20, 1.2, 1.41],
			[30, 1.35, 1.49]
		] as const) {
			// prettier-ignore
			const pAt = (d: number) => (durbinWatson(residualsWith(n, d)).p ?? NaN) / 2;
			expect(pAt(low)).toBeLessThan(0.051);
			expect(pAt(high)).toBeGreaterThan(0.049);
		}
	});

	it('cry wolf as often as they say', () => {
		const random = generator(310);
		const n = 20;
		const x = Array.from({ length: n }, (_, i) => i);
		let [together, normal] = [0, 0];
		for (let i = 0; i < 4000; i += 1) {
			const y = normalDeviates(n, random);
			const [mx, my] = [mean(x), mean(y)];
			const slope = x.reduce((sum, each, j) => sum + (each - mx) * (y[j] ?? 0), 0) / x.reduce((sum, each) => sum + (each - mx) ** 2, 0); // prettier-ignore
			const residuals = y.map((value, j) => value - my - slope * ((x[j] ?? 0) - mx));
			if (durbinWatson(residuals).verdict === 'seen') together += 1;
			if (residualNormality(y).verdict === 'seen') normal += 1;
		}
		// 5 % of 4000 is 200, give or take 14
		expect(Math.abs(together - 200)).toBeLessThan(50);
		expect(Math.abs(normal - 200)).toBeLessThan(50);
	});

	it('tell how neighbours correlate', () => {
		expect(autocorrelation([1, -1, 1, -1])).toBeCloseTo(-0.75, 14);
		expect(autocorrelation([1])).toBeNaN();
	});
});

/** Residuals of length n whose Durbin-Watson statistic is d: a mixture of a slow and a fast pattern. */
function residualsWith(n: number, d: number): number[] {
	const of = (mix: number) =>
		Array.from({ length: n }, (_, i) => (1 - mix) * Math.sin((i * 2 * Math.PI) / n) + mix * (i % 2 ? 1 : -1));
	let [low, high] = [0, 1];
	for (let i = 0; i < 60; i += 1) {
		const middle = (low + high) / 2;
		if ((durbinWatson(of(middle)).statistic ?? NaN) < d) low = middle;
		else high = middle;
	}
	return of(low);
}

describe('histogram rules', () => {
	it('want at least one bin and not without end', () => {
		expect(binsWanted([])).toBe(1);
		expect(binsWanted([3])).toBe(1);
		expect(binsWanted([3, 3, 3, 3])).toBe(3);
		expect(binsWanted(Array.from({ length: 8 }, (_, i) => i), 'sturges')).toBe(4); // prettier-ignore
		expect(binsWanted([0, 0, 1e-9, 2e-9, 1e9])).toBe(200);
		expect(coverageFactor(0.95, Infinity)).toBeCloseTo(1.959964, 6);
	});
});
