import { square } from './fit-curve';
import { singular } from './problems';

/** Smallest share of a column that may stand apart from the columns before it; below, rounding decides the answer. */
const leastIndependence = 1e-13;

/**
 * Householder factorization A = Q R of a tall matrix whose columns are of length about one, so that a small diagonal of
 * R tells how little a column adds to those before it (Golub and Van Loan, Matrix Computations, 5.2).
 */
export class Orthogonal {
	readonly rows: number;
	readonly count: number;
	/** reflectors below, R above the diagonal; one array a column */
	private readonly work: Float64Array[];
	private readonly diagonal: Float64Array;
	private readonly sizes: Float64Array;

	/**
	 * 'tolerant' takes columns that depend on others, for problems that are damped afterwards.
	 * @throws FitProblem 'singular' where a column depends on the others
	 */
	constructor(columns: readonly ArrayLike<number>[], rows: number, kind: 'strict' | 'tolerant' = 'strict') {
		this.rows = rows;
		this.count = columns.length;
		this.work = columns.map((column) => Float64Array.from(column));
		this.diagonal = new Float64Array(this.count);
		this.sizes = new Float64Array(this.count);
		for (let k = 0; k < this.count; k += 1) {
			const column = this.work[k] ?? new Float64Array();
			const apart = lengthFrom(column, k);
			if (kind === 'strict' && !(apart > leastIndependence * lengthFrom(column, 0))) throw singular();
			const first = column[k] ?? 0;
			const alpha = first > 0 ? -apart : apart;
			column[k] = first - alpha;
			this.diagonal[k] = alpha;
			// a column without length of its own reflects nothing
			this.sizes[k] = apart * (apart + Math.abs(first)) || Infinity;
			for (let j = k + 1; j < this.count; j += 1) this.reflect(this.work[j] ?? new Float64Array(), k);
		}
	}

	private reflect(target: Float64Array, k: number): void {
		const column = this.work[k] ?? target;
		let sum = 0;
		for (let i = k; i < this.rows; i += 1) sum += (column[i] ?? 0) * (target[i] ?? 0);
		const factor = sum / (this.sizes[k] ?? 1);
		for (let i = k; i < this.rows; i += 1) target[i] = (target[i] ?? 0) - factor * (column[i] ?? 0);
	}

	/** Q^T b, in place. */
	rotate(target: Float64Array): void {
		for (let k = 0; k < this.count; k += 1) this.reflect(target, k);
	}

	/** Q b, in place. */
	rotateBack(target: Float64Array): void {
		for (let k = this.count - 1; k >= 0; k -= 1) this.reflect(target, k);
	}

	private entry(row: number, column: number): number {
		return row === column ? (this.diagonal[column] ?? 0) : (this.work[column]?.[row] ?? 0);
	}

	/** R as columns, for small problems that stand for the tall one. */
	triangle(): Float64Array[] {
		return this.work.map((_, j) => Float64Array.from({ length: this.count }, (__, i) => (i <= j ? this.entry(i, j) : 0))); // prettier-ignore
	}

	/** Whether column k holds more than rounding that the columns before it do not. */
	standsApart(k: number): boolean {
		let before = 0;
		for (let i = 0; i <= k; i += 1) before += square(this.entry(i, k));
		return Math.abs(this.entry(k, k)) > leastIndependence * Math.sqrt(before);
	}

	/** R^-1 b for the first `count` of b, in place. */
	solve(target: Float64Array): void {
		for (let i = this.count - 1; i >= 0; i -= 1) {
			let rest = target[i] ?? 0;
			for (let j = i + 1; j < this.count; j += 1) rest -= this.entry(i, j) * (target[j] ?? 0);
			target[i] = rest / this.entry(i, i);
		}
	}

	/** R^-T b for the first `count` of b, in place. */
	solveTransposed(target: Float64Array): void {
		for (let i = 0; i < this.count; i += 1) {
			let rest = target[i] ?? 0;
			for (let j = 0; j < i; j += 1) rest -= this.entry(j, i) * (target[j] ?? 0);
			target[i] = rest / this.entry(i, i);
		}
	}

	/** R^-1 by rows: row j tells parameter j by `count` independent deviations. */
	inverse(): number[][] {
		const rows = Array.from({ length: this.count }, () => new Array<number>(this.count).fill(0));
		for (let k = 0; k < this.count; k += 1) {
			const unit = new Float64Array(this.count);
			unit[k] = 1;
			this.solve(unit);
			unit.forEach((value, j) => {
				const row = rows[j];
				if (row) row[k] = value;
			});
		}
		return rows;
	}

	/** The first `count` columns of Q. */
	thin(): Float64Array[] {
		return Array.from({ length: this.count }, (_, k) => {
			const column = new Float64Array(this.rows);
			column[k] = 1;
			this.rotateBack(column);
			return column;
		});
	}
}

/** Euclidean length of the tail, safe against overflow by the largest entry. */
function lengthFrom(column: Float64Array, from: number): number {
	let largest = 0;
	for (let i = from; i < column.length; i += 1) largest = Math.max(largest, Math.abs(column[i] ?? 0));
	if (!(largest > 0) || !Number.isFinite(largest)) return largest > 0 ? Infinity : 0;
	let sum = 0;
	for (let i = from; i < column.length; i += 1) {
		const share = (column[i] ?? 0) / largest;
		sum += share * share;
	}
	return largest * Math.sqrt(sum);
}
