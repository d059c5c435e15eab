import {
	combineVariances,
	variance,
	type Component,
	type Quantity,
	type Source,
	type Uncertainty
} from '$lib/quantities';
import { outOfRange } from './problems';
import { chiSquaredOf, readingVariance } from './stated';

/**
 * 'scatter': what the readings' own (reading-scope) uncertainty says is replaced by the residual scatter with n - p
 * degrees of freedom. 'stated': it is kept and chi-squared tells whether it was believable. Which one is decided
 * beforehand: the larger of the two after seeing the data has the wrong coverage. Shared deviations always propagate.
 */
export type FitPolicy = 'scatter' | 'stated';

/** 'stated': weights 1/u2 of the residual from the reading-scope parts of y and inputs (effective variance). */
export type FitWeights = 'equal' | 'stated';

export interface FitOptions {
	/** makes the scatter's component unique, e.g. the fit's name */
	id: string;
	/** how a budget names the scatter about the fit */
	scatterLabel: string;
	policy: FitPolicy;
	weights: FitWeights;
}

export interface ModelFit {
	readonly points: number;
	readonly degreesOfFreedom: number;
	readonly policy: FitPolicy;
	readonly parameters: readonly Quantity[];
	/** by the fit's policy alone (scatter, or the stated reading-scope parts), SI; what is shared comes on top in the parameters */
	readonly covariance: readonly (readonly number[])[];
	/** at each point, SI, in the order of the points */
	readonly fitted: readonly number[];
	/** y - fitted, SI */
	readonly residuals: readonly number[];
	/** how far each point pulls the fit to itself, 0 to 1; their sum is the number of parameters */
	readonly leverage: readonly number[];
	/** of unit weight, in the unit of y when weights are equal; null when no degree of freedom is left */
	readonly residualStandardDeviation: number | null;
	/** against the stated reading-scope uncertainty; null when some point states none */
	readonly chiSquared: number | null;
	readonly iterations: number;
	/** the curve with its band, at inputs in SI */
	at(inputs: readonly number[]): { value: number } & Uncertainty;
	/** where another reading of unit weight would fall: the band and the scatter about it */
	nextReading(inputs: readonly number[]): { value: number } & Uncertainty;
}

/** How the fit at a point moves with one of its inputs. */
export interface InputSlope {
	readonly input: Quantity;
	/** derivative of the fit */
	readonly slope: number;
	/** derivative of the fit's gradient towards the inner parameters */
	readonly gradient: readonly number[];
}

/** A fit at its solution, as a straight problem in `count` inner parameters (which may differ from those told). */
export interface Solved {
	readonly y: readonly Quantity[];
	/** values and units of the parameters told */
	readonly parameters: readonly Omit<Quantity, 'parts'>[];
	readonly weights: readonly number[];
	readonly fitted: readonly number[];
	readonly residuals: readonly number[];
	readonly scatter: number;
	/** inner parameters (rows) along independent directions, for unit weight */
	readonly inner: readonly (readonly number[])[];
	/** parameters told along the same directions */
	readonly spread: readonly (readonly number[])[];
	/** the directions at each point: column k holds the k-th */
	readonly directions: readonly ArrayLike<number>[];
	/** inputs of a point that are not exact */
	inputs(point: number): readonly InputSlope[];
	/** turns a direction by the curvature that the residuals meet, for deviations that all points share */
	bend?(direction: number[]): number[];
	evaluate(inputs: readonly number[]): { value: number; gradient: readonly number[] };
	readonly iterations: number;
}

/** Gives every parameter its linear parts, and the curve its band. */
export function modelFit(solved: Solved, { id, scatterLabel, policy }: FitOptions): ModelFit {
	const { y, residuals, spread, scatter } = solved;
	const count = spread.length;
	const degreesOfFreedom = y.length - count;
	const deviation = degreesOfFreedom > 0 ? Math.sqrt(scatter / degreesOfFreedom) : null;
	const sources = gather(solved, policy);
	const own = [...sources].filter(([source]) => source.component.scope === 'reading').map(([, moves]) => moves); // prettier-ignore
	if (policy === 'scatter' && deviation !== null && deviation > 0) {
		// all parameters rest on one variance estimate, hence one component; its deviations are independent
		const component: Component = { id: `${id}:scatter`, label: scatterLabel, scope: 'run', degreesOfFreedom };
		for (let k = 0; k < count; k += 1) {
			const moves = new Array<number>(count).fill(0);
			moves[k] = deviation;
			sources.set({ component }, moves);
			own.push(moves);
		}
	}
	const variances = y.map((each, i) =>
		readingVariance(
			each,
			solved.inputs(i).map(({ input, slope }) => [input, slope] as const)
		)
	);
	const parameters = solved.parameters.map((told, j) => ({
		...told,
		parts: partsOf(sources, spread[j] ?? [])
	}));
	// squares of what stands apart by more than 1e150 are no numbers any more
	if (!parameters.every((each) => Number.isFinite(each.value) && Number.isFinite(variance(each)))) {
		throw outOfRange();
	}
	return {
		points: y.length,
		degreesOfFreedom,
		policy,
		parameters,
		covariance: covarianceOf(own, spread),
		fitted: solved.fitted,
		residuals,
		leverage: y.map((_, i) => solved.directions.reduce((sum, column) => sum + square(column[i]), 0)),
		residualStandardDeviation: deviation,
		chiSquared: chiSquaredOf(residuals, variances),
		iterations: solved.iterations,
		...curve(solved, sources, policy === 'scatter' ? (deviation ?? 0) : 0, `${id}:scatter`)
	};
}

/** By source: how far one standard deviation of it moves the fit along each direction. */
function gather(solved: Solved, policy: FitPolicy): Map<Source, number[]> {
	const { y, weights, residuals, inner, directions } = solved;
	const count = directions.length;
	const sources = new Map<Source, number[]>();
	const kept = (source: Source) => policy === 'stated' || source.component.scope !== 'reading';
	const movesOf = (source: Source) => {
		let moves = sources.get(source);
		if (!moves) sources.set(source, (moves = new Array<number>(count).fill(0)));
		return moves;
	};
	y.forEach((quantity, i) => {
		const root = Math.sqrt(weights[i] ?? 0);
		for (const [source, part] of quantity.parts) {
			if (!kept(source)) continue;
			const moves = movesOf(source);
			for (let k = 0; k < count; k += 1) moves[k] = (moves[k] ?? 0) + part * root * (directions[k]?.[i] ?? 0);
		}
		for (const { input, slope, gradient } of solved.inputs(i)) {
			let turned: number[] | undefined;
			for (const [source, part] of input.parts) {
				if (!kept(source)) continue;
				turned ??= turn(inner, gradient);
				const moves = movesOf(source);
				for (let k = 0; k < count; k += 1) {
					const pull = root * root * (residuals[i] ?? 0) * (turned[k] ?? 0);
					moves[k] = (moves[k] ?? 0) + part * (pull - slope * root * (directions[k]?.[i] ?? 0));
				}
			}
		}
	});
	if (solved.bend) {
		for (const [source, moves] of sources) {
			if (source.component.scope !== 'reading') sources.set(source, solved.bend(moves));
		}
	}
	return sources;
}

/** A gradient towards inner parameters, along the directions. */
function turn(inner: readonly (readonly number[])[], gradient: readonly number[]): number[] {
	return inner.map((_, k) => inner.reduce((sum, row, j) => sum + (row[k] ?? 0) * (gradient[j] ?? 0), 0));
}

function partsOf(
	sources: ReadonlyMap<Source, readonly number[]>,
	row: readonly number[]
): Map<Source, number> {
	const parts = new Map<Source, number>();
	for (const [source, moves] of sources) {
		const part = row.reduce((sum, each, k) => sum + each * (moves[k] ?? 0), 0);
		if (part !== 0) parts.set(source, part);
	}
	return parts;
}

function covarianceOf(
	own: readonly (readonly number[])[],
	spread: readonly (readonly number[])[]
): number[][] {
	const count = spread.length;
	const middle = Array.from({ length: count }, () => new Array<number>(count).fill(0));
	for (const moves of own) addSquare(middle, moves);
	const half = spread.map((row) => middle.map((line) => row.reduce((sum, each, k) => sum + each * (line[k] ?? 0), 0))); // prettier-ignore
	return half.map((line) =>
		spread.map((row) => row.reduce((sum, each, k) => sum + each * (line[k] ?? 0), 0))
	);
}

function addSquare(matrix: number[][], moves: readonly number[]): void {
	matrix.forEach((line, j) => {
		for (let k = 0; k < line.length; k += 1) line[k] = (line[k] ?? 0) + (moves[j] ?? 0) * (moves[k] ?? 0);
	});
}

/** The band by component, so that it costs the same at any point however many readings stand behind it. */
function curve(
	solved: Solved,
	sources: ReadonlyMap<Source, readonly number[]>,
	deviation: number,
	scatterId: string
): Pick<ModelFit, 'at' | 'nextReading'> {
	const count = solved.spread.length;
	const squares = new Map<Component, number[][]>();
	for (const [{ component }, moves] of sources) {
		const matrix =
			squares.get(component) ?? Array.from({ length: count }, () => new Array<number>(count).fill(0));
		addSquare(matrix, moves);
		squares.set(component, matrix);
	}
	const at = (inputs: readonly number[], extra: number) => {
		const { value, gradient } = solved.evaluate(inputs);
		const along = turn(solved.inner, gradient);
		const variances = new Map<Component, number>();
		for (const [component, matrix] of squares) {
			let size = component.id === scatterId ? extra : 0;
			matrix.forEach((line, j) => {
				line.forEach((each, k) => (size += each * (along[j] ?? 0) * (along[k] ?? 0)));
			});
			variances.set(component, Math.max(0, size));
		}
		return { value, ...combineVariances(variances) };
	};
	return {
		at: (inputs) => at(inputs, 0),
		nextReading: (inputs) => at(inputs, deviation * deviation)
	};
}

function square(value: number | undefined): number {
	return value === undefined ? 0 : value * value;
}
