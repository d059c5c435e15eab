import { readFileSync } from 'node:fs';
import { afterAll, describe, expect, it } from 'vitest';
import {
	analyseVariance,
	binsWanted,
	chiSquaredAbove,
	chiSquaredExceededBy,
	compareScatter,
	dixon,
	fAbove,
	fExceededBy,
	grubbs,
	grubbsCritical,
	meanAgainst,
	meansOfOwnScatter,
	meansOfSameScatter,
	median,
	normalBelow,
	normality,
	normalQuantile,
	pairedMeans,
	quantile,
	studentOutside,
	type MeanTest
} from '$lib/statistics';
import { digits, Worst } from './nist';

type Row = number[];
interface Samples {
	a: number[];
	b: number[];
	c: number[];
	/** t, degrees of freedom, p, interval */
	same: Row;
	own: Row;
	paired: Row;
	one: Row;
	scatter: Row;
	anova: Row;
}
interface Computed {
	source: string;
	studentOutside: Row[];
	fAbove: Row[];
	fExceededBy: Row[];
	chiSquaredAbove: Row[];
	chiSquaredExceededBy: Row[];
	normalBelow: Row[];
	normalQuantile: Row[];
	shapiro: { values: number[]; w: number; p: number }[];
	means: Samples[];
	quantiles: { values: number[]; median: number; quantiles: Row[]; sturges: number; scott: number; fd: number }[]; // prettier-ignore
}

const computed = JSON.parse(
	readFileSync(new URL('data/scipy_statistics.json', import.meta.url), 'utf8')
) as Computed;
const worst = new Worst();

afterAll(() => worst.print('Distribution functions and tests'));

describe(`distribution functions beside ${computed.source}`, () => {
	const functions = {
		studentOutside,
		fAbove,
		fExceededBy,
		chiSquaredAbove,
		chiSquaredExceededBy,
		normalBelow,
		normalQuantile
	} as Record<string, (...values: number[]) => number>;

	it.each(Object.keys(functions))('%s to ten digits', (name) => {
		const rows = computed[name as 'fAbove'];
		expect(rows.length).toBeGreaterThan(10);
		for (const row of rows) {
			const [input, expected = NaN] = [row.slice(0, -1), row.at(-1)];
			const value = functions[name]?.(...input) ?? NaN;
			expect(worst.note(name, input.join(', '), digits(value, expected)), input.join(', ')).toBeGreaterThan(10); // prettier-ignore
		}
	});

	it('gives printed critical values', () => {
		// GUM (JCGM 100:2008) H.5.2.3: F0.95(9, 40) = 2.12, F0.975(9, 40) = 2.45
		expect(fExceededBy(0.05, 9, 40)).toBeCloseTo(2.12, 2);
		expect(fExceededBy(0.025, 9, 40)).toBeCloseTo(2.45, 2);
		// chi-squared of 1 degree of freedom at 5 % is the square of the normal 97.5 % point, 1.959964
		expect(Math.sqrt(chiSquaredExceededBy(0.05, 1))).toBeCloseTo(1.959964, 6);
		expect(normalQuantile(0.975)).toBeCloseTo(1.959964, 6);
		// York's data: chi-squared 11.8663532 of 8 degrees of freedom (cran/bfsl)
		expect(chiSquaredAbove(11.8663532, 8)).toBeCloseTo(0.1572672287, 9);
	});
});

describe(`tests of means and scatter beside ${computed.source}`, () => {
	const row = (test: MeanTest | null) =>
		test ? [test.t, test.degreesOfFreedom, test.p, test.interval.low, test.interval.high] : [];
	const near = (family: string, values: readonly number[], expected: readonly number[]) => {
		expect(values).toHaveLength(expected.length);
		values.forEach((value, i) => {
			expect(worst.note(family, `number ${i}`, digits(value, expected[i] ?? NaN))).toBeGreaterThan(9);
		});
	};

	it.each(computed.means.map((samples, i) => [i, samples] as const))('sample %i', (_, samples) => {
		const { a, b, c } = samples;
		near('t tests', row(meansOfSameScatter(a, c)), samples.same);
		near('t tests', row(meansOfOwnScatter(a, c)), samples.own);
		near('t tests', row(pairedMeans(a, b)), samples.paired);
		// scipy tells the interval of the mean, ours is of the difference
		near('t tests', row(meanAgainst(a, 5.2)), samples.one.map((each, i) => (i > 2 ? each - 5.2 : each))); // prettier-ignore
		const scatter = compareScatter(a, c);
		near('F test', [scatter?.ratio ?? NaN, scatter?.p ?? NaN], samples.scatter);
		const anova = analyseVariance([a, b, c]);
		near('ANOVA', [anova?.f ?? NaN, anova?.p ?? NaN], samples.anova);
	});

	it.each(computed.shapiro.map((sample) => [sample.values.length, sample] as const))(
		'Shapiro and Wilk of %i values',
		(_, sample) => {
			const result = normality(sample.values);
			expect(worst.note('Shapiro-Wilk w', '', digits(result?.w ?? NaN, sample.w))).toBeGreaterThan(6);
			// scipy carries AS R94's table in single precision
			expect(worst.note('Shapiro-Wilk p', '', digits(result?.p ?? NaN, sample.p))).toBeGreaterThan(4);
		}
	);

	it.each(computed.quantiles.map((sample) => [sample.values.length, sample] as const))(
		'quantiles and histogram rules of %i values',
		(_, sample) => {
			expect(median(sample.values)).toBeCloseTo(sample.median, 14);
			for (const [p = NaN, expected = NaN] of sample.quantiles)
				expect(quantile(sample.values, p)).toBeCloseTo(expected, 14);
			expect(binsWanted(sample.values, 'sturges')).toBe(sample.sturges);
			expect(binsWanted(sample.values, 'scott')).toBe(sample.scott);
			expect(binsWanted(sample.values, 'freedman-diaconis')).toBe(sample.fd);
		}
	);
});

describe('outlier tests', () => {
	it("has the critical values of Grubbs' test as printed", () => {
		// chem.libretexts.org, appendix 07 (two-sided); its n = 7 and n = 15 entries are misprints and left out
		const printed: [number, number, number][] = [
			[3, 1.155, 1.155],
			[4, 1.481, 1.496],
			[5, 1.715, 1.764],
			[6, 1.887, 1.973]
		];
		for (const [n, five, one] of printed) {
			expect(Math.abs(grubbsCritical(n, 0.05) - five)).toBeLessThan(0.0011);
			expect(Math.abs(grubbsCritical(n, 0.01) - one)).toBeLessThan(0.0011);
		}
		// by scipy 1.10.1 from the formula
		expect(grubbsCritical(50, 0.05)).toBeCloseTo(3.1282, 4);
		expect(grubbsCritical(100, 0.01)).toBeCloseTo(3.754, 4);
	});

	it("reports Dixon's published example without removing anything", () => {
		// en.wikipedia.org, Dixon's Q test: Q = 0.455 of 0.167, kept at 95 % (0.466), rejected at 90 % (0.412)
		const values = [0.189, 0.167, 0.187, 0.183, 0.186, 0.182, 0.181, 0.184, 0.181, 0.177];
		expect(dixon(values)).toEqual({
			index: 1,
			value: 0.167,
			statistic: expect.closeTo(0.4545454545, 9) as number,
			critical: 0.466,
			standsApart: false
		});
		expect(dixon(values, 0.1)).toMatchObject({ critical: 0.412, standsApart: true });
		expect(values).toHaveLength(10);
		expect(grubbs(values)).toMatchObject({ index: 1, standsApart: true });
	});

	it('has nothing to say of too few values, too many, or values without spread', () => {
		expect(grubbs([1, 2])).toBeNull();
		expect(grubbs([2, 2, 2])).toBeNull();
		expect(dixon([1, 2])).toBeNull();
		expect(dixon([2, 2, 2])).toBeNull();
		expect(dixon(Array.from({ length: 31 }, (_, i) => i))).toBeNull();
		expect(dixon([5, 1, 2, 3])).toMatchObject({ index: 0, value: 5 });
	});
});
