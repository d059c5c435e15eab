import {
	addPart,
	QuantityProblem,
	sameDimension,
	variance,
	type Component,
	type Quantity,
	type Source
} from '$lib/quantities';
import { compensatedSum, square } from './summaries';

export interface WeightedMean {
	readonly mean: number;
	/** from the stated uncertainties alone */
	readonly standardError: number;
	/** of the values about the mean, over their stated variances */
	readonly chiSquared: number;
	readonly degreesOfFreedom: number;
	/** the same times the root of chi-squared over its degrees of freedom (Birge ratio); null for one value */
	readonly scaledError: number | null;
}

/** Mean weighted by 1/u2; null of nothing or where some u is not above zero. */
export function weightedMean(
	values: readonly number[],
	standardUncertainties: readonly number[]
): WeightedMean | null {
	const weights = standardUncertainties.map((u) => 1 / (u * u));
	if (values.length === 0 || !weights.every((w) => w > 0 && w < Infinity)) return null;
	const total = compensatedSum(weights);
	const mean = centreOf(values, weights);
	const chiSquared = compensatedSum(values.map((value, i) => (weights[i] ?? 0) * square(value - mean)));
	const degreesOfFreedom = values.length - 1;
	const standardError = 1 / Math.sqrt(total);
	return {
		mean,
		standardError,
		chiSquared,
		degreesOfFreedom,
		scaledError: degreesOfFreedom > 0 ? standardError * Math.sqrt(chiSquared / degreesOfFreedom) : null
	};
}

function centreOf(values: readonly number[], weights: readonly number[]): number {
	const first = values[0] ?? NaN;
	const total = compensatedSum(weights);
	return first + compensatedSum(values.map((value, i) => (weights[i] ?? 0) * (value - first))) / total;
}

export type BetweenMethod = 'paule-mandel' | 'dersimonian-laird';

export interface RandomEffectsMean {
	readonly mean: number;
	readonly standardError: number;
	/** standard deviation between the values' true means, beyond what their own uncertainties explain */
	readonly between: number;
	readonly degreesOfFreedom: number;
	/** of the values about the weighted mean without a between part (Cochran's Q) */
	readonly q: number;
	/** in the order of the values; they add to 1 */
	readonly weights: readonly number[];
}

/**
 * Mean of values that differ by more than their own uncertainties say: each has variance u2 + between2. The between
 * part solves chi-squared = n - 1 (Paule and Mandel 1982) or is the moment estimate of DerSimonian and Laird (1986);
 * zero where the values scatter less. Null of nothing or where some u is not above zero.
 */
export function randomEffectsMean(
	values: readonly number[],
	standardUncertainties: readonly number[],
	method: BetweenMethod = 'paule-mandel'
): RandomEffectsMean | null {
	const fixed = weightedMean(values, standardUncertainties);
	if (!fixed) return null;
	const own = standardUncertainties.map((u) => u * u);
	const between2 =
		fixed.degreesOfFreedom === 0 || fixed.chiSquared <= fixed.degreesOfFreedom
			? 0
			: method === 'paule-mandel'
				? pauleMandel(values, own)
				: moment(fixed, own);
	const weights = own.map((u2) => 1 / (u2 + between2));
	const total = compensatedSum(weights);
	return {
		mean: centreOf(values, weights),
		standardError: 1 / Math.sqrt(total),
		between: Math.sqrt(between2),
		degreesOfFreedom: fixed.degreesOfFreedom,
		q: fixed.chiSquared,
		weights: weights.map((w) => w / total)
	};
}

function moment({ chiSquared, degreesOfFreedom }: WeightedMean, own: readonly number[]): number {
	const weights = own.map((u2) => 1 / u2);
	const total = compensatedSum(weights);
	return (chiSquared - degreesOfFreedom) / (total - compensatedSum(weights.map((w) => w * w)) / total);
}

/** Newton's rule on chi-squared(between2) = n - 1: from zero it rises to the root without passing it. */
function pauleMandel(values: readonly number[], own: readonly number[]): number {
	let between2 = 0;
	for (let round = 0; round < 200; round += 1) {
		const weights = own.map((u2) => 1 / (u2 + between2));
		const mean = centreOf(values, weights);
		const squares = values.map((value) => square(value - mean));
		const excess = compensatedSum(squares.map((s, i) => (weights[i] ?? 0) * s)) - (values.length - 1);
		const fall = compensatedSum(squares.map((s, i) => square(weights[i] ?? 0) * s));
		const next = Math.max(0, between2 + excess / fall);
		if (Math.abs(next - between2) <= 1e-15 * next) return next;
		between2 = next;
	}
	return between2;
}

/**
 * The random-effects mean of quantities with their linear parts: what they share (one barometer) stays shared, and the
 * between part is a component of its own, `${id}:between`, with n - 1 degrees of freedom.
 * @throws QuantityProblem where there is nothing, a dimension differs, or some quantity has no uncertainty
 */
export function combineQuantities(
	items: readonly Quantity[],
	{ id, label, method = 'paule-mandel' }: { id: string; label: string; method?: BetweenMethod }
): { mean: Quantity; effects: RandomEffectsMean } {
	const first = items[0];
	if (!first) throw new QuantityProblem('domain', 'No values, so there is no mean.');
	if (!items.every(({ dimension }) => sameDimension(dimension, first.dimension))) {
		throw new QuantityProblem('dimension', 'Quantities of different kinds have no common mean.');
	}
	const effects = randomEffectsMean(
		items.map(({ value }) => value),
		items.map((item) => Math.sqrt(variance(item))),
		method
	);
	if (!effects) {
		throw new QuantityProblem('domain', 'A weighted mean wants an uncertainty of every value.');
	}
	const parts = new Map<Source, number>();
	items.forEach((item, i) => {
		for (const [source, part] of item.parts) addPart(parts, source, (effects.weights[i] ?? 0) * part);
	});
	if (effects.between > 0) {
		const component: Component = {
			id: `${id}:between`,
			label,
			scope: 'course',
			degreesOfFreedom: effects.degreesOfFreedom
		};
		const share = Math.sqrt(compensatedSum(effects.weights.map((w) => w * w)));
		addPart(parts, { component }, effects.between * share);
	}
	return { mean: { ...first, value: effects.mean, parts }, effects };
}
