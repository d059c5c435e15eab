import { coverageFactor } from '$lib/quantities';
import { fAbove, studentOutside } from './probability';
import {
	mean,
	pooledStandardDeviation,
	standardDeviation,
	standardError,
	square,
	type Interval
} from './summaries';

export interface MeanTest {
	/** mean minus the reference, or minus the other mean */
	readonly difference: number;
	readonly standardError: number;
	readonly t: number;
	readonly degreesOfFreedom: number;
	/** probability of a difference as large in either direction, were there none */
	readonly p: number;
	/** of the difference, with the probability asked for */
	readonly interval: Interval;
}

const usual = 0.95;

function test(difference: number, error: number, degreesOfFreedom: number, probability: number): MeanTest {
	// equal values without any scatter: no difference seen, and no evidence of one
	const t = error === 0 && difference === 0 ? 0 : difference / error;
	const half = coverageFactor(probability, degreesOfFreedom) * error;
	return {
		difference,
		standardError: error,
		t,
		degreesOfFreedom,
		p: studentOutside(t, degreesOfFreedom),
		interval: { low: difference - half, high: difference + half }
	};
}

/** Student's test of a mean against a reference value; null below two values. */
export function meanAgainst(
	values: readonly number[],
	reference: number,
	probability = usual
): MeanTest | null {
	if (values.length < 2) return null;
	// deviations of the reference: mean minus reference would lose digits that the values have in common
	const difference = mean(values.map((value) => value - reference));
	return test(difference, standardError(values), values.length - 1, probability);
}

/** Two means whose scatter is taken to be the same (pooled); null where no degree of freedom is left. */
export function meansOfSameScatter(
	a: readonly number[],
	b: readonly number[],
	probability = usual
): MeanTest | null {
	const { value, degreesOfFreedom } = pooledStandardDeviation([a, b]);
	if (a.length === 0 || b.length === 0 || degreesOfFreedom < 1) return null;
	const error = value * Math.sqrt(1 / a.length + 1 / b.length);
	return test(mean(a) - mean(b), error, degreesOfFreedom, probability);
}

/** Two means each with its own scatter (Welch 1947), fractional degrees of freedom as they are; null below two values each. */
export function meansOfOwnScatter(
	a: readonly number[],
	b: readonly number[],
	probability = usual
): MeanTest | null {
	if (a.length < 2 || b.length < 2) return null;
	const [va, vb] = [square(standardError(a)), square(standardError(b))];
	const sum = va + vb;
	const denominator = (va * va) / (a.length - 1) + (vb * vb) / (b.length - 1);
	const degreesOfFreedom = denominator === 0 ? a.length + b.length - 2 : (sum * sum) / denominator;
	return test(mean(a) - mean(b), Math.sqrt(sum), degreesOfFreedom, probability);
}

/** Differences of pairs against zero; null below two pairs. @throws RangeError where the lists differ in length */
export function pairedMeans(
	a: readonly number[],
	b: readonly number[],
	probability = usual
): MeanTest | null {
	if (a.length !== b.length) throw new RangeError(`${a.length} values cannot be paired with ${b.length}.`);
	return meanAgainst(
		a.map((value, i) => value - (b[i] ?? NaN)),
		0,
		probability
	);
}

export interface ScatterTest {
	/** variance of the first over that of the second */
	readonly ratio: number;
	readonly degreesOfFreedom: readonly [number, number];
	/** probability of a ratio as far from 1 in either direction, were the scatters the same */
	readonly p: number;
}

/** Fisher's test of two scatters; null below two values each or where both are zero. */
export function compareScatter(a: readonly number[], b: readonly number[]): ScatterTest | null {
	if (a.length < 2 || b.length < 2) return null;
	const ratio = square(standardDeviation(a) / standardDeviation(b));
	if (Number.isNaN(ratio)) return null;
	const [m, n] = [a.length - 1, b.length - 1];
	const above = fAbove(ratio, m, n);
	const below = fAbove(1 / ratio, n, m);
	return { ratio, degreesOfFreedom: [m, n], p: Math.min(1, 2 * Math.min(above, below)) };
}
