/**
 * The transcendental functions of all arithmetic. Engines differ in the last bit of Math.exp, Math.log and
 * Math.pow; these pure-JavaScript versions give the same bits in every browser and on the server, so that a
 * hand-in recomputes to the very numbers its author saw. Math.sqrt, Math.abs and the four operations are exact
 * by IEEE 754 and need no wrapping.
 */
import stdlibExp from '@stdlib/math-base-special-exp';
import stdlibLn from '@stdlib/math-base-special-ln';
import stdlibPow from '@stdlib/math-base-special-pow';

/** e to the power x. */
export function exp(x: number): number {
	return stdlibExp(x);
}

/** Natural logarithm; NaN below zero, -Infinity at zero. */
export function ln(x: number): number {
	return stdlibLn(x);
}

/** base to the power exponent, IEEE special cases as Math.pow. */
export function pow(base: number, exponent: number): number {
	if (exponent === 1) return base;
	if (exponent === 2) return base * base;
	return stdlibPow(base, exponent);
}
