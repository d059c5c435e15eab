import { elementary } from '$lib/quantities';
import { normalBelow, normalQuantile } from './probability';
import { mean, squaresAboutMean } from './summaries';

export interface Normality {
	/** 1 for values that lie as normal order statistics do */
	readonly w: number;
	/** probability of a w as small, were the values normal */
	readonly p: number;
}

/** Polynomials of Royston's algorithm AS R94 (Appl. Statist. 44 (1995) 547), constant term first. */
const lastWeight = [0, 0.221157, -0.147981, -2.07119, 4.434685, -2.706056];
const secondWeight = [0, 0.042981, -0.293762, -1.752461, 5.682633, -3.582633];
const smallMean = [0.544, -0.39978, 0.025054, -6.714e-4];
const smallDeviation = [1.3822, -0.77857, 0.062767, -0.0020322];
const largeMean = [-1.5861, -0.31082, -0.083751, 0.0038915];
const largeDeviation = [-0.4803, -0.082676, 0.0030302];
const gammaOf = [-2.273, 0.459];

/** The approximation holds from 3 to 5000 values. */
const mostValues = 5000;

/**
 * Test of Shapiro and Wilk (1965) by Royston's approximation: how well the ordered values lie along those expected of
 * normal deviations. Null below 3 or above 5000 values and where all are the same.
 */
export function normality(values: readonly number[]): Normality | null {
	const n = values.length;
	if (n < 3 || n > mostValues) return null;
	const centre = mean(values);
	const sorted = values.map((value) => value - centre).sort((a, b) => a - b);
	const squares = squaresAboutMean(sorted);
	if (!(squares > 0)) return null;
	const weights = upperWeights(n);
	const sum = weights.reduce(
		(total, weight, i) => total + weight * ((sorted[n - 1 - i] ?? 0) - (sorted[i] ?? 0)),
		0
	);
	const w = Math.min(1, (sum * sum) / squares);
	return { w, p: probabilityOf(w, n) };
}

/** Weights of the greatest, second greatest, ... value; the least ones have the same with opposite sign. */
function upperWeights(n: number): number[] {
	if (n === 3) return [Math.SQRT1_2];
	const half = Math.floor(n / 2);
	const expected = Array.from({ length: half }, (_, i) => -normalQuantile((i + 1 - 0.375) / (n + 0.25)));
	const size = 2 * expected.reduce((sum, m) => sum + m * m, 0);
	const root = 1 / Math.sqrt(n);
	const [first = 0, second = 0] = expected;
	const a1 = polynomial(lastWeight, root) + first / Math.sqrt(size);
	if (n <= 5) {
		const scale = Math.sqrt((size - 2 * first * first) / (1 - 2 * a1 * a1));
		return expected.map((m, i) => (i === 0 ? a1 : m / scale));
	}
	const a2 = polynomial(secondWeight, root) + second / Math.sqrt(size);
	const scale = Math.sqrt((size - 2 * first * first - 2 * second * second) / (1 - 2 * a1 * a1 - 2 * a2 * a2));
	return expected.map((m, i) => (i === 0 ? a1 : i === 1 ? a2 : m / scale));
}

function probabilityOf(w: number, n: number): number {
	if (n === 3) {
		// exact
		const least = 0.75;
		return Math.max(
			0,
			(6 / elementary.pi) * (elementary.asin(Math.sqrt(w)) - elementary.asin(Math.sqrt(least)))
		);
	}
	const y = elementary.ln(1 - w);
	if (n <= 11) {
		const gamma = polynomial(gammaOf, n);
		if (y >= gamma) return 1e-99;
		const z = (-elementary.ln(gamma - y) - polynomial(smallMean, n)) / elementary.exp(polynomial(smallDeviation, n)); // prettier-ignore
		return normalBelow(-z);
	}
	const x = elementary.ln(n);
	const z = (y - polynomial(largeMean, x)) / elementary.exp(polynomial(largeDeviation, x));
	return normalBelow(-z);
}

function polynomial(coefficients: readonly number[], x: number): number {
	return coefficients.reduceRight((sum, each) => sum * x + each, 0);
}
