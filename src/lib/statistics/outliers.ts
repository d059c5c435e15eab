import { coverageFactor } from '$lib/quantities';
import { mean, standardDeviation } from './summaries';

/** A value that stands apart, reported and never removed: what to do with it is the experimenter's to say. */
export interface OutlierTest {
	/** where the value stands in the list */
	readonly index: number;
	readonly value: number;
	readonly statistic: number;
	/** what the statistic exceeds by chance with the risk asked for, in either direction */
	readonly critical: number;
	readonly standsApart: boolean;
}

/**
 * Grubbs' test of the value farthest from the mean (Grubbs 1969), two-sided: G = |x - mean| / s against
 * (n - 1) / sqrt(n) * sqrt(t2 / (n - 2 + t2)), t of n - 2 degrees of freedom at risk / n. Null below three values or
 * without spread.
 */
export function grubbs(values: readonly number[], risk = 0.05): OutlierTest | null {
	const n = values.length;
	if (n < 3) return null;
	const centre = mean(values);
	const s = standardDeviation(values);
	if (!(s > 0)) return null;
	let index = 0;
	values.forEach((value, i) => {
		if (Math.abs(value - centre) > Math.abs((values[index] ?? NaN) - centre)) index = i;
	});
	const value = values[index] ?? NaN;
	const statistic = Math.abs(value - centre) / s;
	const critical = grubbsCritical(n, risk);
	return { index, value, statistic, critical, standsApart: statistic > critical };
}

/** Two-sided critical value of Grubbs' test; n at least 3. */
export function grubbsCritical(n: number, risk: number): number {
	const t = coverageFactor(1 - risk / n, n - 2);
	return ((n - 1) / Math.sqrt(n)) * Math.sqrt((t * t) / (n - 2 + t * t));
}

export type DixonRisk = 0.1 | 0.05 | 0.02 | 0.01;

/** Two-sided critical values of Dixon's r10 for n = 3 to 30 (Rorabacher, Anal. Chem. 63 (1991) 139; Dixon 1951). */
const dixonCritical: Record<`${DixonRisk}`, readonly number[]> = {
	'0.1': [
		0.941, 0.765, 0.642, 0.56, 0.507, 0.468, 0.437, 0.412, 0.392, 0.376, 0.361, 0.349, 0.338, 0.329, 0.32,
		0.313, 0.306, 0.3, 0.295, 0.29, 0.285, 0.281, 0.277, 0.273, 0.269, 0.266, 0.263, 0.26
	],
	'0.05': [
		0.97, 0.829, 0.71, 0.625, 0.568, 0.526, 0.493, 0.466, 0.444, 0.426, 0.41, 0.396, 0.384, 0.374, 0.365,
		0.356, 0.349, 0.342, 0.337, 0.331, 0.326, 0.321, 0.317, 0.312, 0.308, 0.305, 0.301, 0.298
	],
	'0.02': [
		0.988, 0.889, 0.78, 0.698, 0.637, 0.59, 0.555, 0.527, 0.502, 0.482, 0.465, 0.45, 0.438, 0.426, 0.416,
		0.407, 0.398, 0.391, 0.384, 0.378, 0.372, 0.367, 0.362, 0.357, 0.353, 0.349, 0.345, 0.341
	],
	'0.01': [
		0.994, 0.926, 0.821, 0.74, 0.68, 0.634, 0.598, 0.568, 0.542, 0.522, 0.503, 0.488, 0.475, 0.463, 0.452,
		0.442, 0.433, 0.425, 0.418, 0.411, 0.404, 0.399, 0.393, 0.388, 0.384, 0.38, 0.376, 0.372
	]
};

/**
 * Dixon's Q (r10): the gap of the value at an end to its neighbour over the whole range. Null below 3 or above 30
 * values, for which no critical values are tabulated, or without spread.
 */
export function dixon(values: readonly number[], risk: DixonRisk = 0.05): OutlierTest | null {
	const order = values.map((_, i) => i).sort((a, b) => (values[a] ?? 0) - (values[b] ?? 0));
	const at = (place: number) => values[order.at(place) ?? -1] ?? NaN;
	const critical = dixonCritical[`${risk}`][values.length - 3];
	const range = at(-1) - at(0);
	if (critical === undefined || !(range > 0)) return null;
	const [gapBelow, gapAbove] = [at(1) - at(0), at(-1) - at(-2)];
	const index = order.at(gapAbove > gapBelow ? -1 : 0) ?? 0;
	const statistic = Math.max(gapBelow, gapAbove) / range;
	return { index, value: values[index] ?? NaN, statistic, critical, standsApart: statistic > critical };
}
