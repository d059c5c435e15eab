/**
 * The transcendental functions of all arithmetic. Engines differ in the last bit of Math.exp, Math.log, Math.pow and
 * their kin; these pure-JavaScript versions give the same bits in every browser and on the server, so that a hand-in
 * recomputes to the very numbers its author saw. Math.sqrt, Math.abs and the four operations are exact by IEEE 754 and
 * need no wrapping.
 */
import stdlibAcos from '@stdlib/math-base-special-acos';
import stdlibAsin from '@stdlib/math-base-special-asin';
import stdlibAtan from '@stdlib/math-base-special-atan';
import stdlibCos from '@stdlib/math-base-special-cos';
import stdlibExp from '@stdlib/math-base-special-exp';
import stdlibLn from '@stdlib/math-base-special-ln';
import stdlibLog10 from '@stdlib/math-base-special-log10';
import stdlibPow from '@stdlib/math-base-special-pow';
import stdlibSin from '@stdlib/math-base-special-sin';
import stdlibTan from '@stdlib/math-base-special-tan';

/** e to the power x. */
export function exp(x: number): number {
	return stdlibExp(x);
}

/** Natural logarithm; NaN below zero, -Infinity at zero. */
export function ln(x: number): number {
	return stdlibLn(x);
}

/** Decadic logarithm, exact at the powers of ten; NaN below zero, -Infinity at zero. */
export function log10(x: number): number {
	return stdlibLog10(x);
}

/** base to the power exponent, IEEE special cases as Math.pow. */
export function pow(base: number, exponent: number): number {
	if (exponent === 1) return base;
	if (exponent === 2) return base * base;
	return stdlibPow(base, exponent);
}

export function sqrt(x: number): number {
	return Math.sqrt(x);
}

/** Angles in radians, here and below. */
export function sin(x: number): number {
	return stdlibSin(x);
}

export function cos(x: number): number {
	return stdlibCos(x);
}

export function tan(x: number): number {
	return stdlibTan(x);
}

/** From -pi/2 to pi/2; NaN outside -1 to 1. */
export function asin(x: number): number {
	return stdlibAsin(x);
}

/** From 0 to pi; NaN outside -1 to 1. */
export function acos(x: number): number {
	return stdlibAcos(x);
}

/** From -pi/2 to pi/2. */
export function atan(x: number): number {
	return stdlibAtan(x);
}

export const pi = 3.141592653589793;
