import { betaBelow } from './probability';
import { square } from './summaries';
import { normality, type Normality } from './normality';

/** Below so many points a pattern in residuals cannot be told from chance. */
export const fewestToTell = 15;

export type ResidualVerdict = 'too-few' | 'nothing-seen' | 'seen';

export interface ResidualTest {
	readonly verdict: ResidualVerdict;
	/** null where there is nothing to compute */
	readonly statistic: number | null;
	/** probability of as much by chance; null where too few points tell */
	readonly p: number | null;
	readonly sentence: string;
}

export const tooFewToTell: Pick<ResidualTest, 'verdict' | 'p' | 'sentence'> = {
	verdict: 'too-few',
	p: null,
	sentence: `Too few points to tell: this wants ${fewestToTell} at least.`
};

/**
 * Durbin-Watson test of residuals in the order of the points (Durbin and Watson 1950, 1951), in both directions:
 * d = sum of (r_i - r_(i-1))2 over sum of r_i2, near 2 for residuals that do not follow one another, small where they
 * run together (a bent curve fitted by a line), large where they alternate. Its probability is that of the beta
 * distribution with d's exact mean and variance under this design. `design` holds the fit's terms at each point, by
 * default a straight line's over evenly spaced points.
 */
export function durbinWatson(
	residuals: readonly number[],
	design?: readonly (readonly number[])[],
	risk = 0.05
): ResidualTest {
	const n = residuals.length;
	const squares = residuals.reduce((sum, r) => sum + r * r, 0);
	const steps = residuals.reduce((sum, r, i) => (i === 0 ? 0 : sum + square(r - (residuals[i - 1] ?? 0))), 0);
	const statistic = squares > 0 ? steps / squares : null;
	if (n < fewestToTell || statistic === null) return { ...tooFewToTell, statistic };
	const { mean, variance } = moments(n, orthonormal(design ?? [residuals.map(() => 1), residuals.map((_, i) => i)])); // prettier-ignore
	// d / 4 lies between 0 and 1
	const [m, v] = [mean / 4, variance / 16];
	const size = (m * (1 - m)) / v - 1;
	const below = betaBelow(statistic / 4, m * size, (1 - m) * size);
	const p = Math.min(1, 2 * Math.min(below, 1 - below));
	if (p >= risk) {
		return {
			verdict: 'nothing-seen',
			statistic,
			p,
			sentence: 'The residuals do not follow one another visibly.'
		};
	}
	return {
		verdict: 'seen',
		statistic,
		p,
		sentence:
			statistic < mean
				? 'Neighbouring residuals run together: the points bend where the fit does not, or the instrument drifts.'
				: 'Neighbouring residuals alternate: look for a reading that is corrected by the next.'
	};
}

/** Exact mean and variance of d under independent normal deviations, for terms of orthonormal columns. */
function moments(n: number, columns: readonly (readonly number[])[]): { mean: number; variance: number } {
	const count = columns.length;
	const differenced = columns.map((column) => secondDifference(column));
	const projected = columns.map((a) => differenced.map((b) => dot(a, b)));
	// of A itself: diagonal 1, 2, ..., 2, 1 and -1 beside it
	const [trace, traceSquare] = [2 * (n - 1), 6 * n - 8];
	let [first, second] = [trace, traceSquare];
	for (let j = 0; j < count; j += 1) {
		first -= projected[j]?.[j] ?? 0;
		second -= 2 * dot(differenced[j] ?? [], differenced[j] ?? []);
		for (let k = 0; k < count; k += 1) second += (projected[j]?.[k] ?? 0) * (projected[k]?.[j] ?? 0);
	}
	const free = n - count;
	const mean = first / free;
	return { mean, variance: (2 * (second - first * mean)) / (free * (free + 2)) };
}

/** A column times the matrix whose quadratic form is the sum of squared steps. */
function secondDifference(column: readonly number[]): number[] {
	return column.map((value, i) => {
		const before = column[i - 1];
		const after = column[i + 1];
		return (before === undefined ? 0 : value - before) + (after === undefined ? 0 : value - after);
	});
}

/** Gram-Schmidt, twice; columns that depend on those before are left out. */
function orthonormal(columns: readonly (readonly number[])[]): number[][] {
	const basis: number[][] = [];
	for (const column of columns) {
		const before = Math.sqrt(dot(column, column));
		let rest = [...column];
		for (let round = 0; round < 2; round += 1) {
			for (const each of basis) {
				const share = dot(each, rest);
				rest = rest.map((value, i) => value - share * (each[i] ?? 0));
			}
		}
		const apart = Math.sqrt(dot(rest, rest));
		if (apart > 1e-12 * before) basis.push(rest.map((value) => value / apart));
	}
	return basis;
}

function dot(a: readonly number[], b: readonly number[]): number {
	return a.reduce((sum, value, i) => sum + value * (b[i] ?? 0), 0);
}

/** Whether residuals are distributed as normal deviations are, by the test of Shapiro and Wilk. */
export function residualNormality(residuals: readonly number[], risk = 0.05): ResidualTest {
	const result: Normality | null = normality(residuals);
	if (residuals.length < fewestToTell || !result) return { ...tooFewToTell, statistic: result?.w ?? null };
	const seen = result.p < risk;
	return {
		verdict: seen ? 'seen' : 'nothing-seen',
		statistic: result.w,
		p: result.p,
		sentence: seen
			? 'The residuals are not distributed as normal deviations are: look for single points far out, or for a curve.'
			: 'The residuals look like normal deviations.'
	};
}
