import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	compensatedSum,
	empiricalDistribution,
	fiveNumbers,
	histogram,
	mean,
	quantile,
	roundEdges,
	standardDeviation,
	standardError
} from '$lib/statistics';

const lists = fc.array(fc.double({ min: -1e4, max: 1e4, noNaN: true }), { minLength: 1, maxLength: 60 });
const seed = 310;

describe('summaries', () => {
	it('keeps digits under cancellation', () => {
		expect(compensatedSum([1e16, 1, -1e16])).toBe(1);
		// three numbers around a large one: s = 1 exactly
		expect(standardDeviation([1e9 + 1, 1e9 + 2, 1e9 + 3])).toBe(1);
		expect(mean([1e9 + 1, 1e9 + 2, 1e9 + 3])).toBe(1e9 + 2);
		expect(standardError([1, 2, 3, 4])).toBeCloseTo(Math.sqrt(5 / 3) / 2, 15);
	});

	it('takes quantiles of type 7', () => {
		// h = (n - 1) p + 1 by hand: n = 4, p = 0.25 -> 1.75, between 1 and 2
		expect(quantile([4, 1, 3, 2], 0.25)).toBe(1.75);
		expect(fiveNumbers([4, 1, 3, 2])).toEqual({
			minimum: 1,
			lowerQuartile: 1.75,
			median: 2.5,
			upperQuartile: 3.25,
			maximum: 4
		});
		expect(fiveNumbers([])).toBeNull();
		expect(quantile([7], 0.9)).toBe(7);
		expect(quantile([], 0.5)).toBeNaN();
	});

	it('does not depend on the order of the values', () => {
		fc.assert(
			fc.property(lists, (list) => {
				const back = [...list].reverse();
				expect(fiveNumbers(back)).toEqual(fiveNumbers(list));
				expect(mean(back)).toBeCloseTo(mean(list), 9);
				expect(empiricalDistribution(back)).toEqual(empiricalDistribution(list));
			}),
			{ seed }
		);
	});
});

describe('distributions', () => {
	it('counts every value once, in bins with round edges', () => {
		fc.assert(
			fc.property(lists, fc.integer({ min: 1, max: 20 }), (list, wanted) => {
				const bins = histogram(list, roundEdges(list, wanted));
				expect(bins.reduce((total, { count }) => total + count, 0)).toBe(list.length);
			}),
			{ seed }
		);
		expect(roundEdges([62, 71, 88], 5)).toEqual([60, 70, 80, 90]);
		expect(roundEdges([3], 5)).toEqual([2.5, 3.5]);
	});

	it('puts an edge value into the bin above, the last edge into the last', () => {
		expect(histogram([0, 1, 2], [0, 1, 2]).map(({ count }) => count)).toEqual([1, 2]);
	});

	it('climbs to one', () => {
		expect(empiricalDistribution([2, 1, 2])).toEqual([
			{ value: 1, share: 1 / 3 },
			{ value: 2, share: 1 }
		]);
	});
});
