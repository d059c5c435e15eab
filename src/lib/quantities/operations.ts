import {
	divideDimensions,
	isDimensionless,
	multiplyDimensions,
	nameDimension,
	nameDimensionWithArticle,
	raiseDimension,
	sameDimension,
	dimensionless,
	type Dimension
} from './dimension';
import { exp as expOf, ln as lnOf, pow } from './elementary';
import { QuantityProblem } from './problems';
import { propagate, type Quantity } from './quantity';
import { coherentUnit, divideUnits, intervalUnit, multiplyUnits, unitOne } from './units';

export function add(a: Quantity, b: Quantity): Quantity {
	requireSame(a, b, 'added');
	if (a.point && b.point) {
		throw new QuantityProblem(
			'temperature-points',
			'Two temperatures on a scale have no sum. Add a difference in kelvins.'
		);
	}
	const point = a.point || b.point;
	const unit = b.point ? b.unit : a.unit;
	return propagate(a.value + b.value, a.dimension, [[a, 1], [b, 1]], unit, point); // prettier-ignore
}

export function subtract(a: Quantity, b: Quantity): Quantity {
	requireSame(a, b, 'subtracted');
	const point = a.point && !b.point;
	const unit = point ? a.unit : intervalUnit(a.unit);
	return propagate(a.value - b.value, a.dimension, [[a, 1], [b, -1]], unit, point); // prettier-ignore
}

export function multiply(a: Quantity, b: Quantity): Quantity {
	const dimension = multiplyDimensions(a.dimension, b.dimension);
	return propagate(a.value * b.value, dimension, [[a, b.value], [b, a.value]], multiplyUnits(a.unit, b.unit)); // prettier-ignore
}

export function divide(a: Quantity, b: Quantity): Quantity {
	if (b.value === 0) throw new QuantityProblem('domain', 'A division by zero.');
	const value = a.value / b.value;
	const dimension = divideDimensions(a.dimension, b.dimension);
	return propagate(value, dimension, [[a, 1 / b.value], [b, -value / b.value]], divideUnits(a.unit, b.unit)); // prettier-ignore
}

export function negate(a: Quantity): Quantity {
	return propagate(-a.value, a.dimension, [[a, -1]], intervalUnit(a.unit));
}

/** a to the power b; b is a number without dimension, and exact unless a has none either. */
export function power(a: Quantity, b: Quantity): Quantity {
	requireNumber(b, 'An exponent');
	const dimension = isDimensionless(a.dimension) ? dimensionless : raiseDimension(a.dimension, b.value);
	if (!isDimensionless(a.dimension) && b.parts.size > 0) {
		throw new QuantityProblem('dimension', 'A quantity with a unit takes an exact exponent only.');
	}
	if (a.value < 0 && !Number.isInteger(b.value)) {
		throw new QuantityProblem('domain', 'A negative number has no power with a broken exponent.');
	}
	const value = pow(a.value, b.value);
	const towardsBase = b.value === 0 ? 0 : b.value * pow(a.value, b.value - 1);
	const towardsExponent = b.parts.size === 0 ? 0 : value * lnOf(a.value);
	return propagate(value, dimension, [[a, towardsBase], [b, towardsExponent]], coherentUnit(dimension)); // prettier-ignore
}

/** Natural logarithm; wants a number, as in ln(p/Pa). */
export function ln(a: Quantity): Quantity {
	requireNumber(a, 'A logarithm');
	if (a.value <= 0) throw new QuantityProblem('domain', 'A logarithm wants a number above zero.');
	return propagate(lnOf(a.value), dimensionless, [[a, 1 / a.value]], unitOne);
}

export function exp(a: Quantity): Quantity {
	requireNumber(a, 'An exponential');
	const value = expOf(a.value);
	return propagate(value, dimensionless, [[a, value]], unitOne);
}

export function squareRoot(a: Quantity): Quantity {
	if (a.value < 0) throw new QuantityProblem('domain', 'A square root wants a number that is not negative.');
	const value = Math.sqrt(a.value);
	if (value === 0 && a.parts.size > 0) {
		throw new QuantityProblem('domain', 'The square root of an uncertain zero has no linear uncertainty.');
	}
	const dimension = raiseDimension(a.dimension, 0.5);
	return propagate(
		value,
		dimension,
		[[a, value === 0 ? 0 : 0.5 / value]],
		fractional(dimension) ? unitOne : coherentUnit(dimension)
	);
}

export function absolute(a: Quantity): Quantity {
	if (a.value === 0 && a.parts.size > 0) {
		throw new QuantityProblem('domain', 'The amount of an uncertain zero has no linear uncertainty.');
	}
	return propagate(Math.abs(a.value), a.dimension, [[a, a.value < 0 ? -1 : 1]], intervalUnit(a.unit));
}

/** A temperature on the Celsius scale as thermodynamic temperature. */
export function thermodynamicTemperature(a: Quantity): Quantity {
	if (!sameDimension(a.dimension, [0, 0, 0, 0, 1, 0, 0])) {
		throw new QuantityProblem(
			'dimension',
			`Temperature wanted; this is ${nameDimensionWithArticle(a.dimension)}.`
		);
	}
	if (a.value <= 0) throw new QuantityProblem('domain', 'A temperature at or below absolute zero.');
	return propagate(a.value, a.dimension, [[a, 1]], intervalUnit(a.unit));
}

/** Sum of at least one quantity of the same kind. */
export function sum(items: readonly Quantity[]): Quantity {
	const first = firstOf(items, 'sum');
	for (const item of items) requireSame(first, item, 'added');
	if (first.point)
		throw new QuantityProblem('temperature-points', 'Temperatures on a scale have a mean, but no sum.');
	return propagate(total(items), first.dimension, items.map((item) => [item, 1] as const), first.unit); // prettier-ignore
}

/** Arithmetic mean of at least one quantity of the same kind. */
export function mean(items: readonly Quantity[]): Quantity {
	const first = firstOf(items, 'mean');
	for (const item of items) requireSame(first, item, 'averaged');
	const each = 1 / items.length;
	return propagate(total(items) / items.length, first.dimension, items.map((item) => [item, each] as const), first.unit, first.point); // prettier-ignore
}

/**
 * Value at `x` of the straight pieces between known points (both in SI, ascending in x). Outside the points there is
 * no value: an extrapolated reference would be an invention.
 */
export function interpolate(
	x: Quantity,
	points: readonly { x: number; y: number }[],
	dimension: Dimension
): Quantity {
	const right = points.findIndex((point) => point.x >= x.value);
	const high = points[right];
	const low = points[right - 1] ?? (high && high.x === x.value ? points[right + 1] : undefined);
	if (!high || !low) throw new QuantityProblem('domain', 'It lies outside the tabulated values.');
	const slope = (high.y - low.y) / (high.x - low.x);
	return propagate(low.y + slope * (x.value - low.x), dimension, [[x, slope]], coherentUnit(dimension));
}

function firstOf(items: readonly Quantity[], what: string): Quantity {
	const first = items[0];
	if (!first) throw new QuantityProblem('domain', `No values, so there is no ${what}.`);
	return first;
}

/** Neumaier's compensated sum: the order of the rows does not show in the result's digits. */
function total(items: readonly Quantity[]): number {
	let sum = 0;
	let lost = 0;
	for (const { value } of items) {
		const next = sum + value;
		lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
		sum = next;
	}
	return sum + lost;
}

function fractional(dimension: Dimension): boolean {
	return dimension.some((exponent) => !Number.isInteger(exponent));
}

function requireSame(a: Quantity, b: Quantity, verb: string): void {
	if (sameDimension(a.dimension, b.dimension)) return;
	throw new QuantityProblem(
		'dimension',
		`${capitalise(nameDimensionWithArticle(a.dimension))} and ${nameDimensionWithArticle(b.dimension)} cannot be ${verb}.`
	);
}

function requireNumber(a: Quantity, what: string): void {
	if (isDimensionless(a.dimension)) return;
	throw new QuantityProblem(
		'dimension',
		`${what} wants a number without unit; this is ${nameDimensionWithArticle(a.dimension)}. Divide the ${nameDimension(a.dimension)} by a unit first.`
	);
}

function capitalise(words: string): string {
	return words.charAt(0).toUpperCase() + words.slice(1);
}
