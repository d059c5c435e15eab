import { combineVariances, intervalUnit, unitOne, type Component, type Source } from '$lib/quantities';
import type { ModelFit, Solved } from './fit-types';

/** The curve and its band, by component, so that it costs the same at any point however many readings stand behind it. */
export function curve(
	solved: Solved,
	sources: ReadonlyMap<Source, readonly number[]>,
	deviation: number,
	scatterId: string
): Pick<ModelFit, 'at' | 'nextReading' | 'quantityAt'> {
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
		quantityAt: (inputs) => {
			const first = solved.y[0];
			const { value, gradient } = solved.evaluate(inputs);
			const unit = intervalUnit(first?.unit ?? unitOne);
			const parts = partsOf(sources, turn(solved.inner, gradient));
			return { value, dimension: unit.dimension, unit, point: false, parts };
		},
		at: (inputs) => at(inputs, 0),
		nextReading: (inputs) => at(inputs, deviation * deviation)
	};
}

/** A gradient towards inner parameters, along the directions. */
export function turn(inner: readonly (readonly number[])[], gradient: readonly number[]): number[] {
	return inner.map((_, k) => inner.reduce((sum, row, j) => sum + (row[k] ?? 0) * (gradient[j] ?? 0), 0));
}

/** Linear parts of what moves by `row` along the directions. */
export function partsOf(
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

/** Adds the products of all pairs. */
export function addSquare(matrix: number[][], moves: readonly number[]): void {
	matrix.forEach((line, j) => {
		for (let k = 0; k < line.length; k += 1) line[k] = (line[k] ?? 0) + (moves[j] ?? 0) * (moves[k] ?? 0);
	});
}

/** The same bits everywhere, which the power operator does not promise. */
export function square(value: number): number {
	return value * value;
}
