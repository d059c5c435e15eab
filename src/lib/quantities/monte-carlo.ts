/**
 * Propagation of distributions by Monte Carlo (JCGM 101:2008): for models whose straight-line approximation, or the
 * normal distribution of whose result, is in doubt. It stands beside linear propagation and replaces nothing.
 */
import { covarianceFactor, type CovarianceMatrix } from './correlated';
import { draw, requireDistribution, type Distribution } from './distributions';
import { QuantityProblem } from './problems';
import { randomSource, type RandomSource } from './random';
import { placeOfFirstDigit } from './rounding';

export interface MonteCarloOptions {
	/** a whole number of 32 bits; the same one gives the same result to the last bit */
	seed: number;
	/** a fixed number, or 'adaptive': until mean, uncertainty and both ends stand to the wanted digits (7.9) */
	trials: number | 'adaptive';
	/** of the intervals; 0.95 unless said */
	coverage?: number;
	/** significant digits of the standard uncertainty that an adaptive run settles; 2 unless said */
	digits?: 1 | 2;
	/** where an adaptive run ends though it has not settled; a million unless said */
	mostTrials?: number;
}

export interface Interval {
	low: number;
	high: number;
}

export interface MonteCarloResult {
	trials: number;
	mean: number;
	standardUncertainty: number;
	coverage: number;
	/** the shortest one of the coverage (7.7, note 5) */
	shortest: Interval;
	/** as much below it as above it */
	symmetric: Interval;
	/** whether an adaptive run reached its digits; true for a fixed number of trials */
	settled: boolean;
}

/** Draws for one trial: gives all inputs of the model at once, so that correlated ones can be drawn together. */
export type Sampler = (random: RandomSource) => readonly number[];

/** Independent inputs, each with its distribution. */
export function independent(distributions: readonly Distribution[]): Sampler {
	distributions.forEach(requireDistribution);
	return (random) => distributions.map((distribution) => draw(distribution, random));
}

/** Jointly normal inputs by their means and covariance matrix (6.4.8). */
export function jointlyNormal(means: readonly number[], covariances: CovarianceMatrix): Sampler {
	const factor = covarianceFactor(covariances);
	const columns = factor[0]?.length ?? 0;
	return (random) => {
		const normals = Array.from({ length: columns }, () => random.normal());
		return means.map((mean, i) => normals.reduce((sum, each, j) => sum + (factor[i]?.[j] ?? 0) * each, mean));
	};
}

/**
 * The distribution of `model` over the inputs, in plain numbers of any one unit system.
 * @throws QuantityProblem where the model has no finite value for some draw
 */
export function monteCarlo(
	model: (inputs: readonly number[]) => number,
	sample: Sampler,
	options: MonteCarloOptions
): MonteCarloResult {
	const coverage = options.coverage ?? 0.95;
	if (!(coverage > 0 && coverage < 1))
		throw new QuantityProblem('domain', 'A coverage lies between 0 and 1.');
	const random = randomSource(options.seed);
	const run = (trials: number) => {
		const values = new Float64Array(trials);
		for (let i = 0; i < trials; i += 1) {
			const value = model(sample(random));
			if (!Number.isFinite(value)) {
				throw new QuantityProblem(
					'not-finite',
					'For some values of the inputs the result is not a finite number.'
				);
			}
			values[i] = value;
		}
		return values;
	};
	if (options.trials !== 'adaptive') {
		if (!Number.isInteger(options.trials) || options.trials < 1) {
			throw new QuantityProblem('domain', 'The number of trials is a whole number above zero.');
		}
		return { ...summarise(run(options.trials), coverage), settled: true };
	}
	return adaptively(run, coverage, options.digits ?? 2, options.mostTrials ?? 1e6);
}

function adaptively(
	run: (trials: number) => Float64Array,
	coverage: number,
	digits: 1 | 2,
	mostTrials: number
): MonteCarloResult {
	const batchSize = Math.max(10_000, Math.ceil(100 / (1 - coverage)));
	const batches: Float64Array[] = [];
	const found: MonteCarloResult[] = [];
	do {
		const batch = run(batchSize);
		batches.push(batch);
		found.push({ ...summarise(batch, coverage), settled: true });
		if (found.length > 1 && hasSettled(batches, found, digits)) {
			return { ...summarise(joined(batches), coverage), settled: true };
		}
	} while ((batches.length + 1) * batchSize <= mostTrials);
	return { ...summarise(joined(batches), coverage), settled: false };
}

/** 7.9.4: twice the standard deviation of each average is below the numerical tolerance of the uncertainty. */
function hasSettled(
	batches: readonly Float64Array[],
	found: readonly MonteCarloResult[],
	digits: 1 | 2
): boolean {
	const pooled = Math.sqrt(
		found.reduce((sum, { standardUncertainty: u }) => sum + u * u, 0) / batches.length
	);
	if (pooled === 0) return true;
	const tolerance = Number(`0.5e${placeOfFirstDigit(pooled) - digits + 1}`);
	const figures: ((result: MonteCarloResult) => number)[] = [
		({ mean }) => mean,
		({ standardUncertainty }) => standardUncertainty,
		({ shortest }) => shortest.low,
		({ shortest }) => shortest.high
	];
	return figures.every((figure) => 2 * deviationOfAverage(found.map(figure)) < tolerance);
}

function deviationOfAverage(values: readonly number[]): number {
	const n = values.length;
	const centre = values.reduce((sum, value) => sum + value, 0) / n;
	const squares = values.reduce((sum, value) => sum + (value - centre) * (value - centre), 0);
	return Math.sqrt(squares / (n * (n - 1)));
}

function joined(batches: readonly Float64Array[]): Float64Array {
	const all = new Float64Array(batches.reduce((sum, { length }) => sum + length, 0));
	let at = 0;
	for (const batch of batches) {
		all.set(batch, at);
		at += batch.length;
	}
	return all;
}

function summarise(values: Float64Array, coverage: number): Omit<MonteCarloResult, 'settled'> {
	const trials = values.length;
	// the first value as the origin, so that results far from zero keep the digits of their scatter
	const origin = values[0] ?? 0;
	const shift = values.reduce((sum, value) => sum + (value - origin), 0) / trials;
	const mean = origin + shift;
	let squares = 0;
	for (const value of values) squares += (value - mean) * (value - mean);
	const sorted = values.slice().sort();
	return {
		trials,
		mean,
		standardUncertainty: trials > 1 ? Math.sqrt(squares / (trials - 1)) : 0,
		coverage,
		shortest: shortestInterval(sorted, coverage),
		symmetric: symmetricInterval(sorted, coverage)
	};
}

/** 7.7: the interval spans q of the M ordered values, q = pM rounded. */
function spanned(trials: number, coverage: number): number {
	return Math.min(trials - 1, Math.floor(coverage * trials + 0.5));
}

function shortestInterval(sorted: Float64Array, coverage: number): Interval {
	const q = spanned(sorted.length, coverage);
	let best = 0;
	let width = Infinity;
	for (let r = 0; r + q < sorted.length; r += 1) {
		const here = (sorted[r + q] ?? 0) - (sorted[r] ?? 0);
		if (here < width) [best, width] = [r, here];
	}
	return { low: sorted[best] ?? NaN, high: sorted[best + q] ?? NaN };
}

function symmetricInterval(sorted: Float64Array, coverage: number): Interval {
	const q = spanned(sorted.length, coverage);
	const r = Math.floor((sorted.length - q) / 2);
	const from = Math.min(r, sorted.length - 1 - q);
	return { low: sorted[from] ?? NaN, high: sorted[from + q] ?? NaN };
}
