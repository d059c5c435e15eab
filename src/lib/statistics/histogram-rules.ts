import { elementary } from '$lib/quantities';
import { quantile, standardDeviation } from './summaries';

export type HistogramRule = 'sturges' | 'scott' | 'freedman-diaconis';

/** More bins than this show single values, not a distribution. */
const mostBins = 200;

/**
 * How many equal bins a histogram of the values wants, at least one: Sturges (1926) by the number of values alone, Scott
 * (1979) by their standard deviation, Freedman and Diaconis (1981) by their quartiles. Where the last two see no
 * spread, Sturges decides.
 */
export function binsWanted(values: readonly number[], rule: HistogramRule = 'freedman-diaconis'): number {
	const n = values.length;
	if (n < 2) return 1;
	const sturges = Math.ceil(elementary.ln(n) / elementary.ln(2)) + 1;
	if (rule === 'sturges') return sturges;
	const spread =
		rule === 'scott'
			? // (24 sqrt(pi))^(1/3)
				3.4908302 * standardDeviation(values)
			: 2 * (quantile(values, 0.75) - quantile(values, 0.25));
	const width = spread / elementary.pow(n, 1 / 3);
	if (!(width > 0)) return sturges;
	const range = Math.max(...values) - Math.min(...values);
	return Math.min(mostBins, Math.max(1, Math.ceil(range / width)));
}
