import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	combinedUncertainty,
	correlated,
	correlation,
	covariance,
	covarianceFrom,
	covarianceOfMeans,
	exactly,
	multiply,
	parseUnit,
	plainNumber,
	QuantityProblem,
	standardUncertainty,
	subtract,
	sum,
	type Component
} from '$lib/quantities';

const component: Component = { id: 'c', label: 'Readings', scope: 'run', degreesOfFreedom: 4 };

/** Covariance matrix of random linear combinations, so positive semidefinite, of any rank up to n. */
const matrices = fc
	.tuple(fc.integer({ min: 1, max: 6 }), fc.integer({ min: 1, max: 6 }))
	.chain(([n, rank]) =>
		fc.array(fc.array(fc.double({ min: -3, max: 3, noNaN: true }), { minLength: rank, maxLength: rank }), {
			minLength: n,
			maxLength: n
		})
	)
	.filter((rows) => rows.every((row) => row.some((each) => Math.abs(each) > 1e-3)))
	.map((rows) =>
		rows.map((a) => rows.map((b) => a.reduce((total, each, i) => total + each * (b[i] ?? 0), 0)))
	);

describe('correlated inputs', () => {
	it('reproduce any covariance matrix, singular ones too', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(matrices, (matrix) => {
				const quantities = correlated(matrix.map((_, i) => plainNumber(i + 1)), matrix, component); // prettier-ignore
				quantities.forEach((a, i) =>
					quantities.forEach((b, j) => {
						const scale = Math.sqrt((matrix[i]?.[i] ?? 0) * (matrix[j]?.[j] ?? 0));
						// a rank-deficient matrix is known to its rounding only
						expect(Math.abs(covariance(a, b) - (matrix[i]?.[j] ?? NaN))).toBeLessThan(1e-9 * scale);
					})
				);
			}),
			{ numRuns: 500, seed: 310 }
		);
	});

	it('do not depend on the order of the quantities', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(matrices, (matrix) => {
				const zeros = matrix.map(() => plainNumber(0));
				const turned = matrix.map((row) => [...row].reverse()).reverse();
				const [one, other] = [
					sum(correlated(zeros, matrix, component)),
					sum(correlated(zeros, turned, component))
				];
				const scale = matrix.reduce((most, row, i) => Math.max(most, row[i] ?? 0), 0);
				expect(Math.abs(covariance(one, one) - covariance(other, other))).toBeLessThan(1e-8 * scale);
			}),
			{ numRuns: 300, seed: 311 }
		);
	});

	it('that are one and the same differ by nothing', () => {
		const [a, b] = correlated([plainNumber(1), plainNumber(2)], [[4, 6], [6, 9]], component); // prettier-ignore
		const threeA = multiply(plainNumber(3), a ?? plainNumber(0));
		const twoB = multiply(plainNumber(2), b ?? plainNumber(0));
		expect(standardUncertainty(subtract(threeA, twoB))).toBeLessThan(1e-15);
	});

	it('rest on one variance estimate', () => {
		const quantities = correlated(
			[exactly(5, parseUnit('V')), exactly(20, parseUnit('mA'))],
			covarianceFrom([0.003, 1e-5], [[1, -0.4], [-0.4, 1]]), // prettier-ignore
			component
		);
		const [voltage = plainNumber(0), current = plainNumber(0)] = quantities;
		expect(correlation(voltage, current)).toBeCloseTo(-0.4, 14);
		expect(combinedUncertainty(multiply(voltage, current)).degreesOfFreedom).toBe(4);
	});

	it('keep what uncertainty they had', () => {
		const first = correlated([plainNumber(1)], [[9]], component);
		const second = correlated(first, [[16]], { ...component, id: 'd' });
		expect(standardUncertainty(second[0] ?? plainNumber(0))).toBe(5);
	});

	it.each<[string, number[][], RegExp]>([
		['contradict each other', [[1, 0.9, 0.9], [0.9, 1, -0.9], [0.9, -0.9, 1]], /contradict each other/],
		['are above one', [[1, 1.2], [1.2, 1]], /contradict each other/],
		['are not symmetric', [[1, 0.2], [0.3, 1]], /symmetric/],
		['are not numbers', [[1, NaN], [NaN, 1]], /finite/],
		['are of another size', [[1]], /2 quantities has 2 rows/],
		['correlate the exact', [[0, 0.1], [0.1, 1]], /without uncertainty/],
		['have a negative variance', [[-1, 0], [0, 1]], /not negative/]
	])('are refused where they %s', (_, matrix, words) => {
		const size = matrix.length === 1 ? 2 : matrix.length;
		const refused = () => correlated(Array.from({ length: size }, () => plainNumber(1)), matrix, component); // prettier-ignore
		expect(refused).toThrow(QuantityProblem);
		expect(refused).toThrow(words);
	}); // prettier-ignore

	it('come from simultaneous readings', () => {
		// by hand: means 2 and 4; sums of squares and products of deviations 2, 8, 4; over n (n - 1) = 6
		expect(covarianceOfMeans([[1, 2, 3], [2, 4, 6]])).toEqual([[2 / 6, 4 / 6], [4 / 6, 8 / 6]]); // prettier-ignore
		expect(() => covarianceOfMeans([[1, 2], [1]])).toThrow(/same length/); // prettier-ignore
	});
});
