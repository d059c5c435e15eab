import { WideSum, wide, type Wide } from './double-double';
import { Orthogonal } from './orthogonal';
import { outOfRange } from './problems';

/** What a linear least-squares problem comes down to, in numbers. */
export interface Solution {
	/** parameters in twice the precision */
	readonly parameters: Wide;
	/** y - fit at each point, not weighted */
	readonly residuals: readonly number[];
	/** sum of weighted squared residuals */
	readonly scatter: number;
	/** row j: the deviations of parameter j along `count` independent directions, for unit weight; its rows' products are the inverse of the normal matrix */
	readonly spread: readonly (readonly number[])[];
	/** column k: the k-th direction at each point; spread times these is the derivative of the parameters towards sqrt(w) y */
	readonly directions: readonly Float64Array[];
}

/** Refinement gains about 16 digits less those of the condition number a round. */
const mostRounds = 12;

/**
 * Weighted linear least squares by Householder factorization, refined through the augmented system with residuals in
 * twice the precision (Bjorck 1967): the parameters come out to all digits that the doubles given determine, as far as
 * the condition of the columns leaves the factorization any digit at all.
 * @param columns one a parameter, in doubled precision
 * @throws FitProblem 'singular', 'not-finite'
 */
export function solveLeastSquares(
	columns: readonly Wide[],
	y: readonly number[],
	weights: readonly number[]
): Solution {
	const count = columns.length;
	const n = y.length;
	const roots = weights.map(Math.sqrt);
	const scales = columns.map((column) => scaleOf(column.high, roots));
	const scaled = columns.map((column, k) => scaleColumn(column, roots, scales[k] ?? 1));
	const target = scaleColumn({ high: Float64Array.from(y), low: new Float64Array(n) }, roots, 1);
	const factored = new Orthogonal(scaled.map((column) => column.high), n); // prettier-ignore
	const { x, r } = refine(scaled, target, factored);
	for (let k = 0; k < count; k += 1) {
		// powers of two: exact
		x.high[k] = (x.high[k] ?? 0) / (scales[k] ?? 1);
		x.low[k] = (x.low[k] ?? 0) / (scales[k] ?? 1);
	}
	const sum = new WideSum();
	for (let i = 0; i < n; i += 1) sum.addProduct(r.high[i] ?? 0, r.low[i] ?? 0, r.high[i] ?? 0, r.low[i] ?? 0);
	return {
		parameters: x,
		residuals: roots.map((root, i) => (r.high[i] ?? 0) / root),
		scatter: sum.high,
		spread: factored.inverse().map((row, j) => row.map((value) => value / (scales[j] ?? 1))),
		directions: factored.thin()
	};
}

/** The power of two next to the column's length; never zero, so that an empty column is found singular later. */
function scaleOf(column: Float64Array, roots: readonly number[]): number {
	let largest = 0;
	column.forEach((value, i) => (largest = Math.max(largest, Math.abs(value * (roots[i] ?? 0)))));
	if (!Number.isFinite(largest)) {
		throw outOfRange();
	}
	return largest > 0 ? powerOfTwoAbove(largest * Math.sqrt(column.length)) : 1;
}

/** Exact by halving and doubling, which no engine does in its own way. */
export function powerOfTwoAbove(size: number): number {
	let power = 1;
	while (power < size && power < 1e300) power *= 2;
	while (power * 0.5 >= size && power > 1e-300) power *= 0.5;
	return power;
}

function scaleColumn(column: Wide, roots: readonly number[], scale: number): Wide {
	const result = wide(roots.length);
	const value = new WideSum();
	roots.forEach((root, i) => {
		const high = (column.high[i] ?? 0) / scale;
		const low = (column.low[i] ?? 0) / scale;
		if (root === 1) value.set(high, low);
		else value.set(0).addProduct(root, 0, high, low);
		value.into(result, i);
	});
	return result;
}

function refine(columns: readonly Wide[], target: Wide, factored: Orthogonal): { x: Wide; r: Wide } {
	const count = columns.length;
	const n = target.high.length;
	const x = wide(count);
	const r = wide(n);
	const sum = new WideSum();
	let before = Infinity;
	for (let round = 0; round < mostRounds; round += 1) {
		// what is still missing of r + A x = b and of A^T r = 0
		const missing = new Float64Array(n);
		for (let i = 0; i < n; i += 1) {
			sum.set(target.high[i] ?? 0, target.low[i] ?? 0).add(-(r.high[i] ?? 0), -(r.low[i] ?? 0));
			columns.forEach((column, k) => {
				sum.addProduct(-(column.high[i] ?? 0), -(column.low[i] ?? 0), x.high[k] ?? 0, x.low[k] ?? 0);
			});
			missing[i] = sum.high;
		}
		const slant = new Float64Array(count);
		columns.forEach((column, k) => {
			sum.set(0);
			for (let i = 0; i < n; i += 1) {
				sum.addProduct(-(column.high[i] ?? 0), -(column.low[i] ?? 0), r.high[i] ?? 0, r.low[i] ?? 0);
			}
			slant[k] = sum.high;
		});
		factored.solveTransposed(slant);
		factored.rotate(missing);
		const step = new Float64Array(count);
		for (let k = 0; k < count; k += 1) {
			step[k] = (missing[k] ?? 0) - (slant[k] ?? 0);
			missing[k] = slant[k] ?? 0;
		}
		factored.solve(step);
		factored.rotateBack(missing);
		for (let i = 0; i < n; i += 1) sum.set(r.high[i] ?? 0, r.low[i] ?? 0).add(missing[i] ?? 0).into(r, i); // prettier-ignore
		let size = 0;
		let whole = 0;
		for (let k = 0; k < count; k += 1) {
			sum.set(x.high[k] ?? 0, x.low[k] ?? 0).add(step[k] ?? 0).into(x, k); // prettier-ignore
			size = Math.max(size, Math.abs(step[k] ?? 0));
			whole = Math.max(whole, Math.abs(x.high[k] ?? 0));
		}
		if (!Number.isFinite(whole)) {
			throw outOfRange();
		}
		if (size <= 1e-30 * whole || size >= before) break;
		before = size;
	}
	return { x, r };
}
