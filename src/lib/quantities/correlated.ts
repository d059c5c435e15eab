import { QuantityProblem } from './problems';
import { withDeviations, type Component, type Quantity, type Source } from './quantity';

/** Symmetric, in the SI units of the quantities that it belongs to. */
export type CovarianceMatrix = readonly (readonly number[])[];

/** Pivots of a correlation matrix below this are rounding, not information. */
const roundingOfPivots = 1e-12;

/**
 * Quantities whose linear parts reproduce a covariance matrix (SI), added to whatever parts they have. All of it rests on
 * one component, because simultaneous readings give one variance estimate with one number of degrees of freedom
 * (GUM H.2: four for five readings, not twelve).
 * @throws QuantityProblem where no quantities can have these covariances
 */
export function correlated(
	quantities: readonly Quantity[],
	covariances: CovarianceMatrix,
	component: Component
): Quantity[] {
	requireMatrix(covariances, quantities.length);
	const factor = covarianceFactor(covariances);
	const sources: Source[] = (factor[0] ?? []).map(() => ({ component }));
	return quantities.map(
		(quantity, i) =>
		withDeviations(quantity, sources.map((source, j) => [source, factor[i]?.[j] ?? 0] as const)) // prettier-ignore
	);
}

/**
 * A factor F of a covariance matrix F F'. It has fewer columns than rows where quantities are fully correlated.
 * @throws QuantityProblem where no quantities can have these covariances
 */
export function covarianceFactor(covariances: CovarianceMatrix): number[][] {
	requireMatrix(covariances, covariances.length);
	const deviations = covariances.map((row, i) => Math.sqrt(row[i] ?? 0));
	const correlations = covariances.map((row, i) =>
		row.map((each, j) => scaled(each, deviations[i], deviations[j]))
	);
	return choleskyFactor(correlations).map((row, i) => row.map((each) => each * (deviations[i] ?? 0)));
}

/** Covariance matrix of the means of simultaneous readings: one row of `series` a quantity (GUM 5.2.3, equation 17). */
export function covarianceOfMeans(series: readonly (readonly number[])[]): number[][] {
	const n = series[0]?.length ?? 0;
	if (n < 2 || series.some((each) => each.length !== n)) {
		throw new QuantityProblem(
			'covariance',
			'Covariances want series of the same length, of at least two readings.'
		);
	}
	const centred = series.map((each) => {
		const centre = each.reduce((sum, value) => sum + value, 0) / n;
		const deviations = each.map((value) => value - centre);
		const left = deviations.reduce((sum, value) => sum + value, 0) / n;
		return deviations.map((value) => value - left);
	});
	return centred.map((a) =>
		centred.map((b) => a.reduce((sum, value, i) => sum + value * (b[i] ?? 0), 0) / (n * (n - 1)))
	);
}

/** Covariance matrix from standard uncertainties (SI) and correlation coefficients. */
export function covarianceFrom(uncertainties: readonly number[], correlations: CovarianceMatrix): number[][] {
	requireMatrix(correlations, uncertainties.length);
	return correlations.map((row, i) =>
		row.map((r, j) => r * (uncertainties[i] ?? 0) * (uncertainties[j] ?? 0))
	);
}

/**
 * The factor F of a positive semidefinite matrix A = F F' (Cholesky with pivots on the diagonal; Higham, Accuracy and
 * Stability of Numerical Algorithms, 10.3). Fully correlated quantities leave fewer columns than rows.
 */
function choleskyFactor(matrix: CovarianceMatrix): number[][] {
	const n = matrix.length;
	const left = matrix.map((row) => [...row]);
	const factor: number[][] = matrix.map(() => []);
	const open = new Set(matrix.keys());
	const at = (i: number, j: number) => left[i]?.[j] ?? 0;
	while (open.size > 0) {
		let pivot = -1;
		for (const i of open) if (pivot < 0 || at(i, i) > at(pivot, pivot)) pivot = i;
		if (at(pivot, pivot) <= roundingOfPivots * n) break;
		const root = Math.sqrt(at(pivot, pivot));
		const column = factor.map((_, i) => (open.has(i) ? at(i, pivot) / root : 0));
		open.delete(pivot);
		factor.forEach((row, i) => row.push(column[i] ?? 0));
		for (const i of open) {
			for (const j of open) (left[i] ?? [])[j] = at(i, j) - (column[i] ?? 0) * (column[j] ?? 0);
		}
	}
	for (const i of open) {
		for (const j of open) {
			if (Math.abs(at(i, j)) > 1e3 * roundingOfPivots * n) throw contradiction();
		}
	}
	return factor;
}

function contradiction(): QuantityProblem {
	return new QuantityProblem(
		'covariance',
		'These correlations contradict each other: no quantities can have them. Look for one that is too large, or rounded.'
	);
}

function scaled(covariance: number, a = 0, b = 0): number {
	if (covariance === 0) return 0;
	if (a === 0 || b === 0) {
		throw new QuantityProblem('covariance', 'A quantity without uncertainty is correlated with nothing.');
	}
	return covariance / a / b;
}

function requireMatrix(matrix: CovarianceMatrix, size: number): void {
	if (matrix.length !== size || matrix.some((row) => row.length !== size)) {
		throw new QuantityProblem(
			'covariance',
			`A covariance matrix of ${size} quantities has ${size} rows and columns.`
		);
	}
	matrix.forEach((row, i) =>
		row.forEach((each, j) => {
			const mirrored = matrix[j]?.[i] ?? NaN;
			const size = Math.max(Math.abs(each), Math.abs(mirrored));
			if (!Number.isFinite(each) || !(Math.abs(each - mirrored) <= 1e-9 * size)) {
				throw new QuantityProblem('covariance', 'A covariance matrix is symmetric, and of finite numbers.');
			}
			if (i === j && each < 0) throw new QuantityProblem('covariance', 'A variance is not negative.');
		})
	);
}
