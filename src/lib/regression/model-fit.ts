import { variance, type Component, type Source } from '$lib/quantities';
import { addSquare, curve, partsOf, square, turn } from './fit-curve';
import type { FitOptions, FitPolicy, ModelFit, Solved } from './fit-types';
import { outOfRange } from './problems';
import { chiSquaredOf, readingVariance } from './stated';

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
		leverage: y.map((_, i) => solved.directions.reduce((sum, column) => sum + square(column[i] ?? 0), 0)),
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
