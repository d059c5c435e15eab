import { coverageFactor } from '$lib/quantities';

/** Neumaier's compensated sum: as good as twice the precision, so that the order of the items hardly matters. */
export function compensatedSum(values: Iterable<number>): number {
	let sum = 0;
	let lost = 0;
	for (const value of values) {
		const next = sum + value;
		lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
		sum = next;
	}
	return sum + lost;
}

/** The same bits everywhere, which the power operator does not promise. */
export function square(value: number): number {
	return value * value;
}

/** Arithmetic mean; NaN of nothing. */
export function mean(values: readonly number[]): number {
	return compensatedSum(values) / values.length;
}

/** Median; NaN of nothing. */
export function median(values: readonly number[]): number {
	return quantile(values, 0.5);
}

/** Sum of squared deviations from the mean. */
export function squaresAboutMean(values: readonly number[]): number {
	const centre = mean(values);
	const deviations = values.map((value) => value - centre);
	// the second sum takes out what rounding of the mean left behind (Chan, Golub and LeVeque 1983)
	const left = compensatedSum(deviations);
	return compensatedSum(deviations.map((d) => d * d)) - (left * left) / values.length;
}

/** Sample standard deviation with n - 1, from deviations of the mean; NaN below two values. */
export function standardDeviation(values: readonly number[]): number {
	if (values.length < 2) return NaN;
	return Math.sqrt(squaresAboutMean(values) / (values.length - 1));
}

/** Standard deviation of the mean. */
export function standardError(values: readonly number[]): number {
	return standardDeviation(values) / Math.sqrt(values.length);
}

/** Standard deviation within groups, each about its own mean, with the degrees of freedom of all; NaN where none is left. */
export function pooledStandardDeviation(groups: readonly (readonly number[])[]): {
	value: number;
	degreesOfFreedom: number;
} {
	const filled = groups.filter((group) => group.length > 0);
	const degreesOfFreedom = filled.reduce((sum, group) => sum + group.length - 1, 0);
	const squares = compensatedSum(filled.map(squaresAboutMean));
	return {
		value: degreesOfFreedom > 0 ? Math.sqrt(squares / degreesOfFreedom) : NaN,
		degreesOfFreedom
	};
}

export interface Interval {
	low: number;
	high: number;
}

/** Interval of the mean by Student's t, for the probability given; null below two values. */
export function meanInterval(values: readonly number[], probability: number): Interval | null {
	if (values.length < 2) return null;
	const centre = mean(values);
	const half = coverageFactor(probability, values.length - 1) * standardError(values);
	return { low: centre - half, high: centre + half };
}

/** Correlation of each value with the next (lag 1), about the common mean; NaN below two values or without spread. */
export function autocorrelation(values: readonly number[]): number {
	if (values.length < 2) return NaN;
	const centre = mean(values);
	const deviations = values.map((value) => value - centre);
	const products = deviations.slice(1).map((d, i) => d * (deviations[i] ?? 0));
	return compensatedSum(products) / compensatedSum(deviations.map((d) => d * d));
}

/**
 * Quantile by linear interpolation between order statistics, h = (n - 1) p + 1 (type 7 of Hyndman and Fan 1996).
 * `probability` from 0 to 1; NaN of nothing.
 */
export function quantile(values: readonly number[], probability: number): number {
	const sorted = [...values].sort((a, b) => a - b);
	return quantileOfSorted(sorted, probability);
}

function quantileOfSorted(sorted: readonly number[], probability: number): number {
	const position = (sorted.length - 1) * Math.min(1, Math.max(0, probability));
	const below = Math.floor(position);
	const low = sorted[below];
	if (low === undefined) return NaN;
	const high = sorted[below + 1] ?? low;
	return low + (position - below) * (high - low);
}

export interface FiveNumbers {
	minimum: number;
	lowerQuartile: number;
	median: number;
	upperQuartile: number;
	maximum: number;
}

/** Least, quartiles (type 7), median, greatest; null of nothing. */
export function fiveNumbers(values: readonly number[]): FiveNumbers | null {
	if (values.length === 0) return null;
	const sorted = [...values].sort((a, b) => a - b);
	const at = (probability: number) => quantileOfSorted(sorted, probability);
	return {
		minimum: at(0),
		lowerQuartile: at(0.25),
		median: at(0.5),
		upperQuartile: at(0.75),
		maximum: at(1)
	};
}
