import { differenceStep, moved, type ModelProblem } from './model-problem';
import { FitProblem } from './problems';

/**
 * A deviation that all points share moves the minimum as the residuals' curvature has it: the inverse of the full
 * second derivative, while the statistics of scatter use the slopes alone, as is usual. Along the fit's directions the
 * full one is 1 - sum of w r times the model's second derivatives.
 */
export function bendBy(
	problem: ModelProblem,
	parameters: readonly number[],
	sizes: readonly number[],
	weights: readonly number[],
	residuals: readonly number[],
	spread: readonly (readonly number[])[]
): ((direction: number[]) => number[]) | undefined {
	const count = parameters.length;
	if (!problem.shares) return undefined;
	const pull = (values: readonly number[]) => problem.pull(values, weights, residuals);
	// column j: how the weighted gradient moves with parameter j
	const curvature = sizes.map((size, j) => {
		const step = differenceStep(size);
		const [above, below] = [pull(moved(parameters, j, step)), pull(moved(parameters, j, -step))];
		return above.map((each, m) => (each - (below[m] ?? 0)) / (2 * step));
	});
	const matrix = spread.map((_, a) =>
		spread.map((__, b) => {
			let sum = a === b ? 1 : 0;
			for (let j = 0; j < count; j += 1) {
				for (let m = 0; m < count; m += 1)
					sum -= (spread[j]?.[a] ?? 0) * (curvature[j]?.[m] ?? 0) * (spread[m]?.[b] ?? 0);
			}
			return sum;
		})
	);
	return (direction) => solveSmall(matrix, direction);
}

/** Gaussian elimination with row exchange for a handful of unknowns. */
function solveSmall(matrix: readonly (readonly number[])[], target: readonly number[]): number[] {
	const rows = matrix.map((row, j) => [...row, target[j] ?? 0]);
	const count = rows.length;
	for (let k = 0; k < count; k += 1) {
		let pivot = k;
		for (let j = k + 1; j < count; j += 1)
			if (Math.abs(rows[j]?.[k] ?? 0) > Math.abs(rows[pivot]?.[k] ?? 0)) pivot = j;
		const [above, below] = [rows[pivot] ?? [], rows[k] ?? []];
		rows[k] = above;
		rows[pivot] = below;
		const lead = above[k] ?? 0;
		if (!(Math.abs(lead) > 1e-12)) {
			throw new FitProblem('no-convergence', 'The fit ends on a ridge, not at a minimum. Start elsewhere.');
		}
		for (let j = k + 1; j < count; j += 1) {
			const row = rows[j] ?? [];
			const factor = (row[k] ?? 0) / lead;
			for (let m = k; m <= count; m += 1) row[m] = (row[m] ?? 0) - factor * (above[m] ?? 0);
		}
	}
	const result = new Array<number>(count).fill(0);
	for (let k = count - 1; k >= 0; k -= 1) {
		let rest = rows[k]?.[count] ?? 0;
		for (let m = k + 1; m < count; m += 1) rest -= (rows[k]?.[m] ?? 0) * (result[m] ?? 0);
		result[k] = rest / (rows[k]?.[k] ?? 1);
	}
	return result;
}
