import { Orthogonal } from './orthogonal';
import { FitProblem, singular } from './problems';

/** Weighted residuals of a model, and how its weighted values move with the parameters (one column each). */
export interface Slopes {
	readonly residuals: Float64Array;
	readonly columns: readonly Float64Array[];
}

export interface Objective {
	/** weighted residuals y - f; null where the model has no finite value */
	residuals(parameters: readonly number[]): Float64Array | null;
	slopes(parameters: readonly number[]): Slopes | null;
	/** length of the weighted y: what rounding of the residuals is measured by */
	readonly size: number;
}

export interface Minimum {
	readonly parameters: readonly number[];
	readonly factored: Orthogonal;
	readonly residuals: Float64Array;
	readonly columns: readonly Float64Array[];
	readonly iterations: number;
}

const mostIterations = 400;
const mostPolishing = 40;
/** First dampings, each tried from the start until one ends at a minimum: bold, cautious, very cautious, all but free. */
const dampings = [1e-3, 1, 1e3, 1e-8];
/** Part of the residuals that one more step would explain: below this only polishing is left. */
const leastOffset = 1e-8;
/** Rounding of residuals, as a share of y. */
const rounding = 1e-14;
/** A parameter of whose whole size the fit feels less than this share of y is not determined. */
const leastEffect = 1e-10;

/**
 * Least squares of a model that is not linear in its parameters: Levenberg-Marquardt steps, damped in each parameter
 * by the greatest slope seen (More 1978) with the gain rule of Nielsen (1999), then undamped steps until rounding stops
 * them. Every step is a Householder solution; all loops are bounded.
 * @throws FitProblem 'singular', 'no-convergence', 'not-finite'
 */
export function minimise(objective: Objective, start: readonly number[]): Minimum {
	if (!objective.residuals(start)) {
		throw new FitProblem(
			'not-finite',
			'The formula has no value at the starting values for some point. Start elsewhere.'
		);
	}
	let iterations = 0;
	let problem = notConverged();
	for (const damping of dampings) {
		const reached = descend(objective, start, damping);
		iterations += reached.iterations;
		if (!reached.settled) continue;
		try {
			const polished = polish(objective, reached.parameters, start);
			return { ...polished, iterations: iterations + polished.iterations };
		} catch (cause) {
			if (!(cause instanceof FitProblem)) throw cause;
			problem = cause;
		}
	}
	throw problem;
}

function notConverged(): FitProblem {
	return new FitProblem(
		'no-convergence',
		'No best parameters were found from these starting values. Start nearer, from a sketch or from the line.'
	);
}

function descend(objective: Objective, start: readonly number[], firstDamping: number) {
	let parameters = [...start];
	let slopes = objective.slopes(parameters);
	let sum = slopes ? squares(slopes.residuals) : Infinity;
	const scale = new Float64Array(start.length);
	let damping = firstDamping;
	let growth = 2;
	let iterations = 0;
	for (; slopes && iterations < mostIterations; iterations += 1) {
		slopes.columns.forEach((column, j) => {
			scale[j] = Math.max(scale[j] ?? 0, Math.sqrt(squares(column)));
		});
		const noise = rounding * objective.size;
		if (offset(slopes) <= Math.max(leastOffset * Math.sqrt(sum), noise)) break;
		const step = dampedStep(slopes, scale, damping);
		const trial = parameters.map((value, j) => value + (step[j] ?? 0));
		const residuals = objective.residuals(trial);
		const sumThere = residuals ? squares(residuals) : Infinity;
		const predicted = predictedGain(slopes, step, scale, damping);
		const gain = (sum - sumThere) / predicted;
		if (sumThere < sum && gain > 0) {
			const next = objective.slopes(trial);
			if (next) {
				parameters = trial;
				sum = sumThere;
				slopes = next;
				const cube = 2 * gain - 1;
				damping *= Math.max(1 / 3, 1 - cube * cube * cube);
				growth = 2;
				continue;
			}
		}
		damping *= growth;
		growth *= 2;
		if (trial.every((value, j) => value === parameters[j]) || damping > 1e30) break;
	}
	const residual = Math.sqrt(sum);
	const settled = slopes !== null && offset(slopes) <= Math.max(1e-3 * residual, rounding * objective.size);
	return { parameters, settled, iterations };
}

/** Length of what the slopes explain of the residuals: zero at a minimum. Columns without slope explain nothing. */
function offset({ residuals, columns }: Slopes): number {
	const basis: Float64Array[] = [];
	for (const column of columns) {
		// modified Gram-Schmidt, twice, over whatever stands apart
		const rest = Float64Array.from(column);
		const before = Math.sqrt(squares(rest));
		for (let round = 0; round < 2; round += 1) {
			for (const each of basis) {
				const share = product(each, rest);
				for (let i = 0; i < rest.length; i += 1) rest[i] = (rest[i] ?? 0) - share * (each[i] ?? 0);
			}
		}
		const apart = Math.sqrt(squares(rest));
		if (!(apart > 1e-13 * before)) continue;
		basis.push(rest.map((value) => value / apart));
	}
	return Math.sqrt(basis.reduce((sum, each) => sum + product(each, residuals) ** 2, 0));
}

/** Solution of min |r - J s|^2 + damping |D s|^2. */
function dampedStep({ residuals, columns }: Slopes, scale: Float64Array, damping: number): Float64Array {
	const n = residuals.length;
	const count = columns.length;
	const root = Math.sqrt(damping);
	const sizes = scale.map((size) => (size > 0 ? size : 1));
	const tall = columns.map((column, j) => {
		const result = new Float64Array(n + count);
		const size = sizes[j] ?? 1;
		for (let i = 0; i < n; i += 1) result[i] = (column[i] ?? 0) / size;
		result[n + j] = root;
		return result;
	});
	const target = new Float64Array(n + count);
	target.set(residuals);
	const factored = new Orthogonal(tall, n + count, 0);
	factored.rotate(target);
	factored.solve(target);
	return Float64Array.from(columns, (_, j) => (target[j] ?? 0) / (sizes[j] ?? 1));
}

/** What the straight model says the sum of squares would lose: |J s|^2 + 2 damping |D s|^2. */
function predictedGain(
	{ columns, residuals }: Slopes,
	step: Float64Array,
	scale: Float64Array,
	damping: number
): number {
	let sum = 0;
	for (let i = 0; i < residuals.length; i += 1) {
		let moved = 0;
		columns.forEach((column, j) => (moved += (column[i] ?? 0) * (step[j] ?? 0)));
		sum += moved * moved;
	}
	step.forEach((each, j) => (sum += 2 * damping * ((scale[j] ?? 0) * each) ** 2));
	return sum;
}

/** Undamped steps while each at least halves what is left to explain: to the last digits that rounding leaves. */
function polish(objective: Objective, reached: readonly number[], start: readonly number[]): Minimum {
	let best = factor(objective, reached, start);
	let iterations = 0;
	for (; iterations < mostPolishing; iterations += 1) {
		const { next, left } = best;
		const trial = left > 0 ? factorOrNull(objective, next, start) : null;
		if (!trial || !(trial.left < left / 2)) break;
		best = trial;
	}
	const { parameters, factored, slopes } = best;
	return { parameters, factored, ...slopes, iterations };
}

interface Factored {
	parameters: readonly number[];
	factored: Orthogonal;
	slopes: Slopes;
	/** length of the explained part of the residuals */
	left: number;
	/** where an undamped step leads */
	next: readonly number[];
}

function factorOrNull(
	objective: Objective,
	parameters: readonly number[],
	start: readonly number[]
): Factored | null {
	try {
		return factor(objective, parameters, start);
	} catch (cause) {
		if (cause instanceof FitProblem) return null;
		throw cause;
	}
}

function factor(objective: Objective, parameters: readonly number[], start: readonly number[]): Factored {
	const slopes = objective.slopes(parameters);
	if (!slopes) throw notConverged();
	slopes.columns.forEach((column, j) => {
		const whole = Math.max(Math.abs(parameters[j] ?? 0), Math.abs(start[j] ?? 0)) || 1;
		if (!(Math.sqrt(squares(column)) * whole > leastEffect * objective.size)) throw singular();
	});
	const factored = new Orthogonal(slopes.columns, slopes.residuals.length);
	const step = Float64Array.from(slopes.residuals);
	factored.rotate(step);
	const count = parameters.length;
	const left = Math.sqrt(squares(step.subarray(0, count)));
	factored.solve(step);
	return {
		parameters,
		factored,
		slopes,
		left,
		next: parameters.map((value, j) => value + (step[j] ?? 0))
	};
}

function squares(values: Float64Array): number {
	let sum = 0;
	for (let i = 0; i < values.length; i += 1) sum += (values[i] ?? 0) * (values[i] ?? 0);
	return sum;
}

function product(a: Float64Array, b: Float64Array): number {
	let sum = 0;
	for (let i = 0; i < a.length; i += 1) sum += (a[i] ?? 0) * (b[i] ?? 0);
	return sum;
}
