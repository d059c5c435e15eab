import { divideUnits, type Quantity } from '$lib/quantities';
import type { Wide } from './double-double';
import { solveLeastSquares, type Solution } from './least-squares';
import type { FitOptions, InputSlope, ModelFit } from './fit-types';
import { modelFit } from './model-fit';
import { FitProblem, requirePoints } from './problems';
import { readingVariance, statedWeights } from './stated';

/** Rounds of effective variance; each shrinks the change by the ratio of the inputs' uncertainty to the scatter. */
export const mostWeightings = 50;

/**
 * y = b0 X0 + b1 X1 + ... by least squares over quantities: `columns` holds one array for each term, with the term's
 * value at each point. A line with an intercept has a column of ones. Uncertain columns propagate.
 * Parameters are told in the unit of y over that of their column; `at` takes one value a column.
 * @throws FitProblem
 */
export function fitLinear(
	columns: readonly (readonly Quantity[])[],
	y: readonly Quantity[],
	options: FitOptions
): ModelFit {
	requirePoints(y.length, columns.length, options.policy);
	const wide = columns.map((column) => exactColumn(column, y.length));
	const uncertain = columns.map((column) => column.some((each) => each.parts.size > 0));
	const unit = (j: number) => columns.map((_, k) => (k === j ? 1 : 0));
	const units = columns.map((_, j) => unit(j));
	const inputsFor = (values: readonly number[], i: number): InputSlope[] =>
		columns.flatMap((column, j) => {
			const input = column[i];
			return !uncertain[j] || !input || input.parts.size === 0
				? []
				: [{ input, slope: values[j] ?? 0, gradient: units[j] ?? [] }];
		});
	const { solution, weights } = solveWeighted(wide, y, options, inputsFor);
	const values = Array.from(solution.parameters.high);
	return modelFit(
		{
			y,
			parameters: columns.map((column, j) => {
				const told = divideUnits(unitOf(y), unitOf(column));
				return { value: values[j] ?? 0, dimension: told.dimension, unit: told, point: false };
			}),
			weights,
			fitted: y.map(({ value }, i) => value - (solution.residuals[i] ?? 0)),
			residuals: solution.residuals,
			scatter: solution.scatter,
			inner: solution.spread,
			spread: solution.spread,
			directions: solution.directions,
			inputs: (i) => inputsFor(values, i),
			evaluate: (inputs) => ({
				value: values.reduce((sum, each, j) => sum + each * (inputs[j] ?? 0), 0),
				gradient: inputs
			}),
			iterations: 1
		},
		options
	);
}

function exactColumn(column: readonly Quantity[], n: number): Wide {
	if (column.length !== n) throw new RangeError(`A column of ${column.length} values beside ${n} points.`);
	return { high: Float64Array.from(column, ({ value }) => value), low: new Float64Array(n) };
}

export function unitOf(column: readonly Quantity[]): Quantity['unit'] {
	const first = column[0];
	if (!first) throw new FitProblem('too-few-points', 'No points yet.');
	return first.unit;
}

/** Solves with equal weights, or by effective variance: weights depend on the parameters, so until these stand. */
export function solveWeighted(
	columns: readonly Wide[],
	y: readonly Quantity[],
	{ weights: kind }: FitOptions,
	inputsFor: (values: readonly number[], i: number) => readonly InputSlope[]
): { solution: Solution; weights: number[] } {
	const values = y.map(({ value }) => value);
	let weights = y.map(() => 1);
	let solution = kind === 'equal' ? solveLeastSquares(columns, values, weights) : null;
	let before: number[] = [];
	for (let round = 0; round < mostWeightings && kind === 'stated'; round += 1) {
		const parameters = solution ? Array.from(solution.parameters.high) : columns.map(() => 0);
		weights = statedWeights(
			y.map((each, i) =>
				readingVariance(
					each,
					inputsFor(parameters, i).map(({ input, slope }) => [input, slope] as const)
				)
			)
		);
		solution = solveLeastSquares(columns, values, weights);
		const now = Array.from(solution.parameters.high);
		const exactInputs = y.every((_, i) => inputsFor(now, i).length === 0);
		if (exactInputs || now.every((each, j) => Math.abs(each - (before[j] ?? NaN)) <= 1e-14 * Math.abs(each)))
			break;
		before = now;
	}
	if (!solution) throw new FitProblem('too-few-points', 'No points yet.');
	return { solution, weights };
}
