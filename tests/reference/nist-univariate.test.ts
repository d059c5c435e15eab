import { afterAll, describe, expect, it } from 'vitest';
import { autocorrelation, deviationsOfTyped, mean, standardDeviation } from '$lib/statistics';
import { digits, nistSets, Worst } from './nist';

interface UnivariateSet {
	certified: { mean: string; sd: string; autocorrelation: string };
	data: string;
}

const sets = nistSets<UnivariateSet>('univariate');
const worst = new Worst();

/**
 * What binary doubles can tell: 1000000.2 and 10000000.2 are off by up to 6e-11 and 9e-10, against a scatter of 0.1, so
 * that no arithmetic on doubles has more than about 9 and 8 digits of their deviations.
 */
const digitsOfDoubles: Record<string, number> = { NumAcc3: 9, NumAcc4: 8 };

describe('NIST StRD, univariate summary statistics, all 9 sets', () => {
	it('are all there', () => {
		expect(Object.keys(sets)).toHaveLength(9);
	});

	it.each(Object.entries(sets))('%s to thirteen certified digits from the numbers as typed', (name, set) => {
		const { origin, deviations } = deviationsOfTyped(set.data.split(' '));
		const { certified } = set;
		const note = (what: string, value: number, of: string) =>
			expect(worst.note(`as typed, ${what}`, name, digits(value, of)), what).toBeGreaterThan(13);
		note('mean', origin + mean(deviations), certified.mean);
		note('standard deviation', standardDeviation(deviations), certified.sd);
		note('autocorrelation', autocorrelation(deviations), certified.autocorrelation);
	});

	it.each(Object.entries(sets))('%s from doubles, as far as these can tell', (name, set) => {
		const values = set.data.split(' ').map(Number);
		const bound = digitsOfDoubles[name] ?? 13;
		const { certified } = set;
		const note = (what: string, value: number, of: string, least: number) => {
			const family = least < 13 ? `from doubles, ${what} of ${name}` : `from doubles, ${what}`;
			expect(worst.note(family, name, digits(value, of)), what).toBeGreaterThan(least);
		};
		note('mean', mean(values), certified.mean, 13);
		note('standard deviation', standardDeviation(values), certified.sd, bound);
		note('autocorrelation', autocorrelation(values), certified.autocorrelation, bound);
	});

	afterAll(() => worst.print('NIST StRD univariate'));
});
