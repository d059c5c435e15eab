import { square } from './fit-curve';
import { Orthogonal } from './orthogonal';

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

/** A narrow bent valley takes up to two thousand steps; the more points, the fewer are allowed, so that time is bounded. */
const mostIterations = 2000;
const leastIterations = 200;
const mostEvaluations = 4_000_000;
/** Share of the residuals that one more step would explain: below this only rounding decides whether a step gained. */
const leastOffset = 1e-8;
/** Rounding of residuals, as a share of y. */
const rounding = 1e-14;
/** Share of a step at which its second order is probed. */
const probe = 0.1;

export interface Descent {
	readonly parameters: readonly number[];
	/** whether nothing but rounding is left to gain */
	readonly settled: boolean;
	readonly iterations: number;
}

/**
 * Levenberg-Marquardt steps, damped in each parameter by the greatest slope seen (More 1978) with the gain rule of
 * Nielsen (1999); where the valley winds, steps follow it by second order (Transtrum and Sethna 2012). Every step is a
 * Householder solution.
 */
export function descend(objective: Objective, start: readonly number[], firstDamping: number): Descent {
	const first = Place.at(objective, start);
	if (!first) return { parameters: start, settled: false, iterations: 0 };
	let here: Place = first;
	const scale = new Float64Array(start.length);
	const allowed = Math.min(
		mostIterations,
		Math.max(leastIterations, mostEvaluations / here.slopes.residuals.length)
	);
	let damping = firstDamping;
	let growth = 2;
	let winding = false;
	let refused = false;
	let iterations = 0;
	for (; iterations < allowed && !here.settled(objective, leastOffset); iterations += 1) {
		here.growScale(scale);
		const straight = here.dampedStep(here.rotated, scale, damping);
		const step: Float64Array = winding ? here.bentStep(objective, straight, scale, damping) : straight;
		const trial = here.parameters.map((value, j) => value + (step[j] ?? 0));
		// after a refusal the next is likely too: its value alone is cheaper than value and slopes
		const worthwhile = !refused || lower(objective.residuals(trial), here.sum);
		const there: Place | null = worthwhile ? Place.at(objective, trial) : null;
		if (there && there.sum < here.sum) {
			const gain: number = (here.sum - there.sum) / here.predictedGain(straight, scale, damping);
			const cube = 2 * gain - 1;
			damping *= Math.max(1 / 3, 1 - cube * cube * cube);
			growth = 2;
			winding ||= gain < 0.7 || gain > 1.3;
			refused = false;
			here = there;
			continue;
		}
		winding = true;
		refused = true;
		damping *= growth;
		growth *= 2;
		const last = here.parameters;
		if (damping > 1e30 || trial.every((value, j) => value === last[j])) break;
	}
	return { parameters: here.parameters, settled: here.settled(objective, 1e-3), iterations };
}

function lower(residuals: Float64Array | null, than: number): boolean {
	return residuals !== null && squares(residuals) < than;
}

/** Parameters with all that is known of the model there. */
class Place {
	/** Q^T r: its first entries are what the slopes explain of the residuals */
	readonly rotated: Float64Array;
	private readonly triangle: readonly Float64Array[];
	private readonly explained: number;

	private constructor(
		readonly parameters: readonly number[],
		readonly slopes: Slopes,
		readonly sum: number,
		private readonly factored: Orthogonal
	) {
		this.rotated = Float64Array.from(slopes.residuals);
		factored.rotate(this.rotated);
		this.triangle = factored.triangle();
		this.explained = Math.sqrt(
			parameters.reduce((sum, _, k) => sum + (factored.standsApart(k) ? square(this.rotated[k] ?? 0) : 0), 0)
		);
	}

	static at(objective: Objective, parameters: readonly number[]): Place | null {
		const slopes = objective.slopes(parameters);
		if (!slopes) return null;
		const factored = new Orthogonal(slopes.columns, slopes.residuals.length, 'tolerant');
		return new Place(parameters, slopes, squares(slopes.residuals), factored);
	}

	settled({ size }: Objective, share: number): boolean {
		return this.explained <= Math.max(share * Math.sqrt(this.sum), rounding * size);
	}

	growScale(scale: Float64Array): void {
		this.triangle.forEach((column, j) => (scale[j] = Math.max(scale[j] ?? 0, Math.sqrt(squares(column)))));
	}

	/** Solution of min |target - R s|^2 + damping |D s|^2. */
	dampedStep(target: Float64Array, scale: Float64Array, damping: number): Float64Array {
		const count = this.triangle.length;
		const root = Math.sqrt(damping);
		const sizes = scale.map((size) => (size > 0 ? size : 1));
		const tall = this.triangle.map((column, j) => {
			const result = new Float64Array(2 * count);
			result.set(column.map((value) => value / (sizes[j] ?? 1)));
			result[count + j] = root;
			return result;
		});
		const solution = new Float64Array(2 * count);
		solution.set(target.subarray(0, count));
		const damped = new Orthogonal(tall, 2 * count, 'tolerant');
		damped.rotate(solution);
		damped.solve(solution);
		return solution.subarray(0, count).map((value, j) => value / (sizes[j] ?? 1));
	}

	/** A step with its second order, which one more evaluation of the model tells; left out where it is not small. */
	bentStep(objective: Objective, step: Float64Array, scale: Float64Array, damping: number): Float64Array {
		const there = objective.residuals(this.parameters.map((value, j) => value + probe * (step[j] ?? 0)));
		if (!there) return step;
		const { residuals, columns } = this.slopes;
		const halfCurvature = residuals.map((residual, i) => {
			let along = 0;
			for (let j = 0; j < columns.length; j += 1) along += (columns[j]?.[i] ?? 0) * (step[j] ?? 0);
			return -((residual - (there[i] ?? 0)) / probe - along) / probe;
		});
		this.factored.rotate(halfCurvature);
		const turn = this.dampedStep(halfCurvature, scale, damping);
		const length = (each: Float64Array) => squares(each.map((value, j) => value * (scale[j] ?? 0)));
		// a turn of 3/8 of the step: second order has stopped being a correction
		return 64 * length(turn) <= 9 * length(step) ? step.map((each, j) => each + (turn[j] ?? 0)) : step;
	}

	/** What the straight model says the sum of squares would lose: |R s|^2 + 2 damping |D s|^2. */
	predictedGain(step: Float64Array, scale: Float64Array, damping: number): number {
		let sum = 0;
		for (let i = 0; i < step.length; i += 1) {
			let moved = 0;
			for (let j = i; j < step.length; j += 1) moved += (this.triangle[j]?.[i] ?? 0) * (step[j] ?? 0);
			sum += moved * moved + 2 * damping * square((scale[i] ?? 0) * (step[i] ?? 0));
		}
		return sum;
	}
}

export function squares(values: Float64Array): number {
	let sum = 0;
	for (let i = 0; i < values.length; i += 1) sum += (values[i] ?? 0) * (values[i] ?? 0);
	return sum;
}
