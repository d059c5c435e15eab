import { isDimensionless, raiseDimension, dimensionless } from './dimension';
import { ln as lnOf, pow } from './elementary';
import { QuantityProblem } from './problems';
import { isDifference, markDifference, propagateOne, propagateTwo, type Quantity } from './quantity';
import { isTemperature, requireNumber, requireSame, requireTemperature } from './require';
import { divideUnits, intervalUnit, multiplyUnits, raiseUnit, unitOne } from './units';

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
	const result = propagateTwo(a.value + b.value, a.dimension, a, 1, b, 1, unit, point);
	return markDifference(result, isDifference(a) && isDifference(b));
}

export function subtract(a: Quantity, b: Quantity): Quantity {
	requireSame(a, b, 'subtracted');
	const point = a.point && !b.point;
	const unit = point ? a.unit : intervalUnit(a.unit);
	const result = propagateTwo(a.value - b.value, a.dimension, a, 1, b, -1, unit, point);
	return markDifference(result, (a.point && b.point) || (isDifference(a) && isDifference(b)));
}

export function multiply(a: Quantity, b: Quantity): Quantity {
	const unit = multiplyUnits(a.unit, b.unit);
	const { dimension } = unit;
	const result = propagateTwo(a.value * b.value, dimension, a, b.value, b, a.value, unit);
	return markDifference(result, (isDifference(a) || isDifference(b)) && isTemperature(result));
}

export function divide(a: Quantity, b: Quantity): Quantity {
	if (b.value === 0) throw new QuantityProblem('domain', 'A division by zero.');
	const value = a.value / b.value;
	const unit = divideUnits(a.unit, b.unit);
	const { dimension } = unit;
	const result = propagateTwo(value, dimension, a, 1 / b.value, b, -value / b.value, unit);
	return markDifference(result, isDifference(a) && isTemperature(result));
}

export function negate(a: Quantity): Quantity {
	return markDifference(propagateOne(-a.value, a.dimension, a, -1, intervalUnit(a.unit)), isDifference(a));
}

/** a to the power b; b is a number without dimension, and exact unless a has none either. */
export function power(a: Quantity, b: Quantity): Quantity {
	requireNumber(b, 'An exponent');
	const dimension = isDimensionless(a.dimension) ? dimensionless : raiseDimension(a.dimension, b.value);
	if (!isDimensionless(a.dimension) && b.parts.size > 0) {
		throw new QuantityProblem('dimension', 'A quantity with a unit takes an exact exponent only.');
	}
	if (a.value < 0 && !(Number.isInteger(b.value) && b.parts.size === 0)) {
		throw new QuantityProblem('domain', 'A negative number takes whole and exact exponents only.');
	}
	if (a.value === 0 && b.value < 0) throw new QuantityProblem('domain', 'A division by zero.');
	const value = pow(a.value, b.value);
	const towardsBase = a.parts.size === 0 || b.value === 0 ? 0 : b.value * pow(a.value, b.value - 1);
	if (towardsBase === Infinity && a.value === 0) {
		throw new QuantityProblem('domain', 'A root of an uncertain zero has no linear uncertainty.');
	}
	const unit = isDimensionless(dimension) ? unitOne : raiseUnit(a.unit, b.value, dimension);
	const towardsExponent = b.parts.size === 0 || value === 0 ? 0 : value * lnOf(a.value);
	return propagateTwo(value, dimension, a, towardsBase, b, towardsExponent, unit);
}

export function squareRoot(a: Quantity): Quantity {
	if (a.value < 0) throw new QuantityProblem('domain', 'A square root wants a number that is not negative.');
	const value = Math.sqrt(a.value);
	if (value === 0 && a.parts.size > 0) {
		throw new QuantityProblem('domain', 'The square root of an uncertain zero has no linear uncertainty.');
	}
	const dimension = raiseDimension(a.dimension, 0.5);
	const slope = value === 0 ? 0 : 0.5 / value;
	return propagateOne(value, dimension, a, slope, raiseUnit(a.unit, 0.5, dimension));
}

export function absolute(a: Quantity): Quantity {
	if (a.value === 0 && a.parts.size > 0) {
		throw new QuantityProblem('domain', 'The amount of an uncertain zero has no linear uncertainty.');
	}
	const sign = a.value < 0 ? -1 : 1;
	const result = propagateOne(Math.abs(a.value), a.dimension, a, sign, intervalUnit(a.unit));
	return markDifference(result, isDifference(a));
}

/** A temperature on the Celsius scale as thermodynamic temperature. */
export function thermodynamicTemperature(a: Quantity): Quantity {
	requireTemperature(a);
	if (isDifference(a)) {
		throw new QuantityProblem(
			'temperature-points',
			'A difference of temperatures has no thermodynamic temperature.'
		);
	}
	if (a.value <= 0) throw new QuantityProblem('domain', 'A temperature at or below absolute zero.');
	return propagateOne(a.value, a.dimension, a, 1, intervalUnit(a.unit));
}
