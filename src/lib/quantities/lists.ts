import { dimensionless, type Dimension } from './dimension';
import { QuantityProblem } from './problems';
import { isDifference, markDifference, propagate, standardUncertainty, type Quantity } from './quantity';
import { requireSame } from './require';
import { coherentUnit, intervalUnit } from './units';

/** Sum of at least one quantity of the same kind. */
export function sum(items: readonly Quantity[]): Quantity {
	const first = firstOf(items, 'sum', 'added');
	if (first.point) {
		throw new QuantityProblem('temperature-points', 'Temperatures on a scale have a mean, but no sum.');
	}
	return like(first, items, total(items), items.map((item) => [item, 1] as const)); // prettier-ignore
}

/** Arithmetic mean of at least one quantity of the same kind. */
export function mean(items: readonly Quantity[]): Quantity {
	const first = firstOf(items, 'mean', 'averaged');
	const each = 1 / items.length;
	return like(first, items, total(items) / items.length, items.map((item) => [item, each] as const)); // prettier-ignore
}

/** The smallest of at least one quantity of the same kind. */
export function minimum(items: readonly Quantity[]): Quantity {
	const first = firstOf(items, 'smallest', 'compared');
	return extreme(first, items, items.reduce((least, { value }) => Math.min(least, value), Infinity)); // prettier-ignore
}

/** The largest of at least one quantity of the same kind. */
export function maximum(items: readonly Quantity[]): Quantity {
	const first = firstOf(items, 'largest', 'compared');
	return extreme(first, items, items.reduce((most, { value }) => Math.max(most, value), -Infinity)); // prettier-ignore
}

/**
 * Sample standard deviation with n - 1, as a quantity: its parts are the derivatives (x_i - mean) / ((n - 1) s), so what
 * is shared by all items drops out.
 */
export function standardDeviation(items: readonly Quantity[]): Quantity {
	const first = firstOf(items, 'standard deviation', 'compared');
	if (items.length < 2) throw new QuantityProblem('domain', 'One value has no scatter. Add another.');
	const centre = total(items) / items.length;
	const deviations = items.map(({ value }) => value - centre);
	// what rounding of the centre left behind is taken out again (Chan, Golub and LeVeque 1983)
	const left = compensated(deviations);
	const squares = compensated(deviations.map((deviation) => deviation * deviation));
	const freedom = items.length - 1;
	const value = Math.sqrt(Math.max(0, squares - (left * left) / items.length) / freedom);
	if (value === 0 && items.some(({ parts }) => parts.size > 0)) {
		throw new QuantityProblem(
			'domain',
			'Values without scatter: their standard deviation has no linear uncertainty.'
		);
	}
	const slopes = items.map(
		(item, i) => [item, value === 0 ? 0 : (deviations[i] ?? 0) / (freedom * value)] as const
	);
	return markDifference(
		propagate(value, first.dimension, slopes, intervalUnit(first.unit)),
		isDifferential(first)
	);
}

/** The standard uncertainty of a quantity, itself an exact quantity of the same kind. */
export function uncertaintyOf(a: Quantity): Quantity {
	const size = propagate(standardUncertainty(a), a.dimension, [], intervalUnit(a.unit));
	return markDifference(size, isDifferential(a));
}

/**
 * Value at `x` of the straight pieces between known points (both in SI, ascending in x). Outside the points there is
 * no value: an extrapolated reference would be an invention.
 */
export function interpolate(
	x: Quantity,
	points: readonly { x: number; y: number }[],
	dimension: Dimension = dimensionless
): Quantity {
	const right = points.findIndex((point) => point.x >= x.value);
	const high = points[right];
	const low = points[right - 1] ?? (high && high.x === x.value ? points[right + 1] : undefined);
	if (!high || !low) throw new QuantityProblem('domain', 'It lies outside the tabulated values.');
	const slope = (high.y - low.y) / (high.x - low.x);
	return propagate(low.y + slope * (x.value - low.x), dimension, [[x, slope]], coherentUnit(dimension));
}

/**
 * Equal values share the derivative: which of them stands first would otherwise decide the uncertainty, and readings
 * of a few digits are often equal.
 */
function extreme(first: Quantity, items: readonly Quantity[], value: number): Quantity {
	const there = items.filter((item) => item.value === value);
	return like(first, items, value, there.map((item) => [item, 1 / there.length] as const)); // prettier-ignore
}

function like(
	first: Quantity,
	items: readonly Quantity[],
	value: number,
	slopes: readonly (readonly [Quantity, number])[]
): Quantity {
	const result = propagate(value, first.dimension, slopes, first.unit, first.point);
	return markDifference(result, items.every(isDifference));
}

/** Whether what is left between values of its kind is a difference of temperatures. */
function isDifferential(of: Quantity): boolean {
	return of.point || isDifference(of);
}

function firstOf(items: readonly Quantity[], what: string, verb: string): Quantity {
	const first = items[0];
	if (!first) throw new QuantityProblem('domain', `No values, so there is no ${what}.`);
	for (const item of items) {
		requireSame(first, item, verb);
		if (item.point !== first.point) {
			throw new QuantityProblem(
				'temperature-points',
				`Temperatures in degrees Celsius and in kelvins cannot be ${verb} together. Write kelvin(t) for the former.`
			);
		}
	}
	return first;
}

function total(items: readonly Quantity[]): number {
	return compensated(items.map(({ value }) => value));
}

/** Neumaier's compensated sum: the order of the rows does not show in the result's digits. */
function compensated(values: readonly number[]): number {
	let sum = 0;
	let lost = 0;
	for (const value of values) {
		const next = sum + value;
		lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
		sum = next;
	}
	return sum + lost;
}
