import { dimensionless } from './dimension';
import * as elementary from './elementary';
import { QuantityProblem } from './problems';
import { propagateOne, type Quantity } from './quantity';
import { requireNumber } from './require';
import { parseUnit, unitOne, type Unit } from './units';

/** Natural logarithm; wants a number, as in ln(p/Pa). */
export function ln(a: Quantity): Quantity {
	requireLogarithmic(a);
	return propagateOne(elementary.ln(a.value), dimensionless, a, 1 / a.value, unitOne);
}

/** Decadic logarithm; wants a number, as in log10(c/(mol/L)). */
export function log10(a: Quantity): Quantity {
	requireLogarithmic(a);
	const slope = 1 / (a.value * elementary.ln(10));
	return propagateOne(elementary.log10(a.value), dimensionless, a, slope, unitOne);
}

export function exp(a: Quantity): Quantity {
	requireNumber(a, 'An exponential');
	const value = elementary.exp(a.value);
	return propagateOne(value, dimensionless, a, value, unitOne);
}

export function sine(a: Quantity): Quantity {
	requireNumber(a, 'A sine', angle);
	return propagateOne(elementary.sin(a.value), dimensionless, a, elementary.cos(a.value), unitOne);
}

export function cosine(a: Quantity): Quantity {
	requireNumber(a, 'A cosine', angle);
	return propagateOne(elementary.cos(a.value), dimensionless, a, -elementary.sin(a.value), unitOne);
}

export function tangent(a: Quantity): Quantity {
	requireNumber(a, 'A tangent', angle);
	const value = elementary.tan(a.value);
	return propagateOne(value, dimensionless, a, 1 + value * value, unitOne);
}

/** Angle from -90 deg to 90 deg, told in radians. */
export function arcsine(a: Quantity): Quantity {
	const slope = 1 / Math.sqrt(underTheRoot(a, 'An arcsine'));
	return propagateOne(elementary.asin(a.value), dimensionless, a, slope, radian());
}

/** Angle from 0 to 180 deg, told in radians. */
export function arccosine(a: Quantity): Quantity {
	const slope = -1 / Math.sqrt(underTheRoot(a, 'An arccosine'));
	return propagateOne(elementary.acos(a.value), dimensionless, a, slope, radian());
}

/** Angle from -90 deg to 90 deg, told in radians. */
export function arctangent(a: Quantity): Quantity {
	requireNumber(a, 'An arctangent');
	return propagateOne(elementary.atan(a.value), dimensionless, a, 1 / (1 + a.value * a.value), radian());
}

const angle = 'an angle or a number';

function radian(): Unit {
	return parseUnit('rad');
}

function requireLogarithmic(a: Quantity): void {
	requireNumber(a, 'A logarithm');
	if (a.value <= 0) throw new QuantityProblem('domain', 'A logarithm wants a number above zero.');
}

/** 1 - a^2 without loss of digits near one. */
function underTheRoot(a: Quantity, what: string): number {
	requireNumber(a, what);
	if (Math.abs(a.value) > 1) throw new QuantityProblem('domain', `${what} wants a number from \u22121 to 1.`);
	if (Math.abs(a.value) === 1 && a.parts.size > 0) {
		throw new QuantityProblem('domain', `${what} of an uncertain 1 has no linear uncertainty.`);
	}
	return (1 - a.value) * (1 + a.value);
}
