import { compensatedSum } from '$lib/statistics';
import type { Quantity } from '$lib/quantities';
import { FitProblem } from './problems';
import { readingVariance, statedWeights, statesOwn } from './stated';

/** The sums of a weighted straight line about its centre; through the origin the centre is the origin itself. */
export interface Sums {
	readonly w: readonly number[];
	/** of the weights; Infinity through the origin, whose height nothing moves */
	readonly total: number;
	readonly centreX: number;
	readonly centreY: number;
	readonly dx: readonly number[];
	readonly xx: number;
	readonly slope: number;
	readonly residuals: readonly number[];
}

export type Through = 'free' | 'origin';

export function noSpread(through: Through): FitProblem {
	return new FitProblem(
		'no-spread',
		through === 'origin'
			? 'All points have x = 0, so there is no line from the origin through them. Vary it.'
			: 'All points have the same x, so there is no line through them. Vary it.'
	);
}

export function leastSquares(
	xs: readonly number[],
	ys: readonly number[],
	w: readonly number[],
	through: Through
): Sums {
	const total = through === 'origin' ? Infinity : compensatedSum(w);
	const centreX = through === 'origin' ? 0 : centreOf(xs, w, total);
	const centreY = through === 'origin' ? 0 : centreOf(ys, w, total);
	const dx = xs.map((value) => value - centreX);
	const dy = ys.map((value) => value - centreY);
	const xx = compensatedSum(dx.map((d, i) => (w[i] ?? 0) * d * d));
	const xy = compensatedSum(dx.map((d, i) => (w[i] ?? 0) * d * (dy[i] ?? 0)));
	if (!(xx > 0)) throw noSpread(through);
	const slope = xy / xx;
	return {
		w,
		total,
		centreX,
		centreY,
		dx,
		xx,
		slope,
		residuals: dx.map((d, i) => (dy[i] ?? 0) - slope * d)
	};
}

/** Weighted mean, corrected once by the mean of what is left: rounding of the first pass drops out. */
function centreOf(values: readonly number[], w: readonly number[], total: number): number {
	const first = compensatedSum(values.map((value, i) => (w[i] ?? 0) * value)) / total;
	return first + compensatedSum(values.map((value, i) => (w[i] ?? 0) * (value - first))) / total;
}

/** Effective variance: the weights depend on the slope, so it is repeated until the slope stands (a few rounds). */
export function weightedLine(
	x: readonly Quantity[],
	y: readonly Quantity[],
	xs: readonly number[],
	ys: readonly number[],
	start: Sums,
	through: Through
): Sums {
	let sums = start;
	const uncertainX = x.some(statesOwn);
	for (let round = 0; round < 50; round += 1) {
		const next = leastSquares(xs, ys, statedWeights(readingVariances(x, y, sums.slope)), through);
		const settled = Math.abs(next.slope - sums.slope) <= 1e-14 * Math.abs(next.slope);
		sums = next;
		// with x exact the weights are those of y, whatever the slope
		if (settled || !uncertainX) break;
	}
	return sums;
}

/** Variance of y - slope * x at each point from its reading-scope parts alone. */
export function readingVariances(x: readonly Quantity[], y: readonly Quantity[], slope: number): number[] {
	return y.map((quantity, i) => {
		const input = x[i];
		return readingVariance(quantity, input ? [[input, slope]] : []);
	});
}
