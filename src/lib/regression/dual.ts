/**
 * Forward-mode dual numbers: a value with its partial derivatives towards whatever is varied (a model's parameters,
 * its inputs). A model written in these gives exact derivatives, so that a fit needs no step size and loses no digits
 * to differences. Outside a function's domain the value is NaN, which a fit takes as a step too far.
 */
import { elementary } from '$lib/quantities';

export interface Dual {
	readonly value: number;
	/** partial derivatives; empty for what does not vary, which costs nothing to carry along */
	readonly gradient: readonly number[];
}

const fixed: readonly number[] = [];

/** ln 10 */
const ln10 = 2.302585092994046;

/** A number that does not vary. */
export function constant(value: number): Dual {
	return { value, gradient: fixed };
}

/** The `index`-th of `count` things that vary. */
export function variable(value: number, index: number, count: number): Dual {
	const gradient = new Array<number>(count).fill(0);
	gradient[index] = 1;
	return { value, gradient };
}

/** The one place where derivatives combine: a function's value and its derivative towards one argument. */
function along(value: number, a: Dual, slope: number): Dual {
	const g = a.gradient;
	// arrays written out are several times as fast as filled ones, and most models have few parameters
	switch (g.length) {
		case 0:
			return { value, gradient: fixed };
		case 1:
			return { value, gradient: [slope * (g[0] ?? 0)] };
		case 2:
			return { value, gradient: [slope * (g[0] ?? 0), slope * (g[1] ?? 0)] };
		case 3:
			return { value, gradient: [slope * (g[0] ?? 0), slope * (g[1] ?? 0), slope * (g[2] ?? 0)] };
		default:
			return { value, gradient: g.map((each) => slope * each) };
	}
}

/** The same towards two arguments. */
function alongBoth(value: number, a: Dual, slopeA: number, b: Dual, slopeB: number): Dual {
	if (b.gradient.length === 0) return along(value, a, slopeA);
	if (a.gradient.length === 0) return along(value, b, slopeB);
	const g = a.gradient;
	const h = b.gradient;
	const mixed = (i: number) => slopeA * (g[i] ?? 0) + slopeB * (h[i] ?? 0);
	switch (g.length) {
		case 1:
			return { value, gradient: [mixed(0)] };
		case 2:
			return { value, gradient: [mixed(0), mixed(1)] };
		case 3:
			return { value, gradient: [mixed(0), mixed(1), mixed(2)] };
		default:
			return { value, gradient: g.map((_, i) => mixed(i)) };
	}
}

export function add(a: Dual, b: Dual): Dual {
	return alongBoth(a.value + b.value, a, 1, b, 1);
}

export function subtract(a: Dual, b: Dual): Dual {
	return alongBoth(a.value - b.value, a, 1, b, -1);
}

export function negate(a: Dual): Dual {
	return along(-a.value, a, -1);
}

export function multiply(a: Dual, b: Dual): Dual {
	return alongBoth(a.value * b.value, a, b.value, b, a.value);
}

export function divide(a: Dual, b: Dual): Dual {
	const value = a.value / b.value;
	return alongBoth(value, a, 1 / b.value, b, -value / b.value);
}

/** a to the power b; a negative base takes exponents that are whole and do not vary. */
export function power(a: Dual, b: Dual): Dual {
	const value = elementary.pow(a.value, b.value);
	const towardsBase = b.value === 0 ? 0 : b.value * elementary.pow(a.value, b.value - 1);
	if (b.gradient.length === 0) return along(value, a, towardsBase);
	// 0 to a varying power above zero stays 0
	const towardsExponent = a.value === 0 && b.value > 0 ? 0 : value * elementary.ln(a.value);
	return alongBoth(value, a, towardsBase, b, towardsExponent);
}

export function exp(a: Dual): Dual {
	const value = elementary.exp(a.value);
	return along(value, a, value);
}

export function ln(a: Dual): Dual {
	return along(elementary.ln(a.value), a, 1 / a.value);
}

export function log10(a: Dual): Dual {
	return along(elementary.log10(a.value), a, 1 / (a.value * ln10));
}

export function sqrt(a: Dual): Dual {
	const value = Math.sqrt(a.value);
	return along(value, a, 0.5 / value);
}

export function abs(a: Dual): Dual {
	return along(Math.abs(a.value), a, a.value < 0 ? -1 : 1);
}

export function sin(a: Dual): Dual {
	return along(elementary.sin(a.value), a, elementary.cos(a.value));
}

export function cos(a: Dual): Dual {
	return along(elementary.cos(a.value), a, -elementary.sin(a.value));
}

export function tan(a: Dual): Dual {
	const value = elementary.tan(a.value);
	return along(value, a, 1 + value * value);
}

export function asin(a: Dual): Dual {
	return along(elementary.asin(a.value), a, 1 / Math.sqrt(1 - a.value * a.value));
}

export function acos(a: Dual): Dual {
	return along(elementary.acos(a.value), a, -1 / Math.sqrt(1 - a.value * a.value));
}

export function atan(a: Dual): Dual {
	return along(elementary.atan(a.value), a, 1 / (1 + a.value * a.value));
}
