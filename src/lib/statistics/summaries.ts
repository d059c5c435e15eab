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

/** Arithmetic mean; NaN of nothing. */
export function mean(values: readonly number[]): number {
	return compensatedSum(values) / values.length;
}

/** Sample standard deviation with n - 1, from deviations of the mean; NaN below two values. */
export function standardDeviation(values: readonly number[]): number {
	if (values.length < 2) return NaN;
	const centre = mean(values);
	const deviations = values.map((value) => value - centre);
	// the second sum takes out what rounding of the mean left behind (Chan, Golub and LeVeque 1983)
	const left = compensatedSum(deviations);
	const squares = compensatedSum(deviations.map((d) => d * d)) - (left * left) / values.length;
	return Math.sqrt(squares / (values.length - 1));
}

/** Standard deviation of the mean. */
export function standardError(values: readonly number[]): number {
	return standardDeviation(values) / Math.sqrt(values.length);
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
