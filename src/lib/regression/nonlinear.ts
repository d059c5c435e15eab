import type { Quantity } from '$lib/quantities';
import { bendBy } from './bend';
import { squares } from './descent';
import { constant } from './dual';
import { mostWeightings } from './linear';
import { minimise, type Minimum } from './marquardt';
import type { FitOptions, ModelFit } from './fit-types';
import { modelFit } from './model-fit';
import { ModelProblem, type Model } from './model-problem';
import { outOfRange, requirePoints } from './problems';
import { readingVariance, statedWeights } from './stated';

/**
 * y = model(parameters, inputs) by least squares over quantities. `inputs` holds one array for each input of the model,
 * `start` a first guess of each parameter in its unit, which is also the unit it is told in. Uncertain inputs propagate.
 * `at` takes one number an input.
 * @throws FitProblem
 */
export function fitNonlinear(
	model: Model,
	inputs: readonly (readonly Quantity[])[],
	y: readonly Quantity[],
	start: readonly Quantity[],
	options: FitOptions
): ModelFit {
	requirePoints(y.length, start.length, options.policy);
	const problem = new ModelProblem(model, inputs, y);
	const { minimum, weights } = solve(problem, start.map(({ value }) => value), options); // prettier-ignore
	const { parameters, factored } = minimum;
	const roots = weights.map(Math.sqrt);
	const residuals = roots.map((root, i) => (minimum.residuals[i] ?? 0) / root);
	const spread = factored.inverse();
	const deviation = Math.sqrt(squares(minimum.residuals) / Math.max(1, y.length - start.length));
	const sizes = spread.map((row, j) => Math.max(Math.abs(parameters[j] ?? 0), deviation * lengthOf(row)));
	const slopes = y.map((_, i) => problem.inputSlopes(parameters, i, sizes));
	return modelFit(
		{
			y,
			parameters: start.map(({ dimension, unit, point }, j) => ({
				value: parameters[j] ?? 0,
				dimension,
				unit,
				point
			})),
			weights,
			fitted: y.map(({ value }, i) => value - (residuals[i] ?? 0)),
			residuals,
			scatter: squares(minimum.residuals),
			inner: spread,
			spread,
			directions: factored.thin(),
			inputs: (i) => slopes[i] ?? [],
			bend: bendBy(problem, parameters, sizes, weights, residuals, spread),
			evaluate: (at) => problem.evaluate(parameters, at.map(constant)),
			iterations: minimum.iterations
		},
		options
	);
}

/** Minimum with equal weights, or by effective variance: the weights of uncertain inputs follow the slopes. */
function solve(problem: ModelProblem, start: readonly number[], { weights: kind }: FitOptions) {
	const { y } = problem;
	let weights = y.map(() => 1);
	if (kind === 'equal') return { minimum: minimise(problem.objective(weights), start), weights };
	const byStated = (parameters: readonly number[]) =>
		statedWeights(
			y.map(
				(each, i) =>
				readingVariance(each, problem.inputSlopes(parameters, i).map(({ input, slope }) => [input, slope] as const)) // prettier-ignore
			)
		);
	let parameters = start;
	if (problem.uncertain) parameters = minimise(problem.objective(weights), start).parameters;
	let minimum: Minimum | null = null;
	for (let round = 0; round < mostWeightings; round += 1) {
		weights = byStated(parameters);
		minimum = minimise(problem.objective(weights), parameters);
		const stands = minimum.parameters.every(
			(value, j) => Math.abs(value - (parameters[j] ?? 0)) <= 1e-12 * Math.abs(value)
		);
		parameters = minimum.parameters;
		if (!problem.uncertain || stands) break;
	}
	if (!minimum) throw outOfRange();
	return { minimum, weights };
}

function lengthOf(row: readonly number[]): number {
	return Math.sqrt(row.reduce((sum, each) => sum + each * each, 0));
}
