import type { Quantity, Uncertainty } from '$lib/quantities';

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
	/** the curve's value with all its linear parts, in the unit of y */
	quantityAt(inputs: readonly number[]): Quantity;
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
