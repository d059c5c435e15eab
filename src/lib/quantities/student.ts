/**
 * Student's t for any degrees of freedom, fractional ones included. Written here because the general library's
 * quantile is 58 kB on the wire, more than all other arithmetic together; the tests hold it against that library.
 */
import { exp, ln } from './elementary';

/** ln of the gamma function for x > 0: Stirling's series after shifting x above 12 (Abramowitz and Stegun 6.1.41). */
function logGamma(x: number): number {
	let shift = 1;
	let z = x;
	while (z < 12) {
		shift *= z;
		z += 1;
	}
	const w = 1 / (z * z);
	const series =
		(1 / 12 - w * (1 / 360 - w * (1 / 1260 - w * (1 / 1680 - w * (1 / 1188 - (w * 691) / 360360))))) / z;
	return (z - 0.5) * ln(z) - z + 0.9189385332046728 + series - ln(shift);
}

/** Regularised incomplete beta function by Lentz's continued fraction (Abramowitz and Stegun 26.5.8). */
function incompleteBeta(x: number, a: number, b: number): number {
	if (x <= 0) return 0;
	if (x >= 1) return 1;
	if (x > (a + 1) / (a + b + 2)) return 1 - incompleteBeta(1 - x, b, a);
	const front = exp(a * ln(x) + b * ln(1 - x) + logGamma(a + b) - logGamma(a) - logGamma(b)) / a;
	const tiny = 1e-300;
	let c = 1;
	let d = 1 - ((a + b) * x) / (a + 1);
	d = 1 / (Math.abs(d) < tiny ? tiny : d);
	let value = d;
	for (let m = 1; m <= 10_000; m += 1) {
		const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
		d = 1 + even * d;
		c = 1 + even / c;
		d = 1 / (Math.abs(d) < tiny ? tiny : d);
		if (Math.abs(c) < tiny) c = tiny;
		value *= d * c;
		const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
		d = 1 + odd * d;
		c = 1 + odd / c;
		d = 1 / (Math.abs(d) < tiny ? tiny : d);
		if (Math.abs(c) < tiny) c = tiny;
		const step = d * c;
		value *= step;
		if (Math.abs(step - 1) < 1e-16) break;
	}
	return front * value;
}

/** Probability of a |t| above the given one. */
function twoTailed(t: number, degreesOfFreedom: number): number {
	return incompleteBeta(degreesOfFreedom / (degreesOfFreedom + t * t), degreesOfFreedom / 2, 0.5);
}

function density(t: number, nu: number): number {
	const logScale = logGamma((nu + 1) / 2) - logGamma(nu / 2) - 0.5 * ln(nu * 3.141592653589793);
	return exp(logScale - ((nu + 1) / 2) * ln(1 + (t * t) / nu));
}

/** From here on Fisher's expansion about the normal quantile is exact to rounding, and the gamma functions lose digits. */
const manyDegreesOfFreedom = 2000;

/** t - z for the normal quantile z, in powers of 1/nu (Abramowitz and Stegun 26.7.5). */
function fisherExpansion(z: number, nu: number): number {
	const s = z * z;
	const first = (z * (s + 1)) / 4;
	const second = (z * ((5 * s + 16) * s + 3)) / 96;
	const third = (z * (((3 * s + 19) * s + 17) * s - 15)) / 384;
	const fourth = (z * ((((79 * s + 776) * s + 1482) * s - 1920) * s - 945)) / 92160;
	return (((fourth / nu + third) / nu + second) / nu + first) / nu;
}

/** The factor k for a two-sided interval of the given coverage, e.g. 0.95; degreesOfFreedom may be fractional or Infinity. */
export function coverageFactor(coverage: number, degreesOfFreedom: number): number {
	if (degreesOfFreedom <= manyDegreesOfFreedom) return quantileByNewton(coverage, degreesOfFreedom);
	const known = quantileByNewton(coverage, manyDegreesOfFreedom);
	let z = known;
	for (let i = 0; i < 20; i += 1) z = known - fisherExpansion(z, manyDegreesOfFreedom);
	return degreesOfFreedom === Infinity ? z : z + fisherExpansion(z, degreesOfFreedom);
}

function quantileByNewton(coverage: number, nu: number): number {
	const outside = 1 - coverage;
	let low = 0;
	let high = 1;
	while (twoTailed(high, nu) > outside && high < 1e12) high *= 2;
	let t = high / 2;
	// Newton, kept inside a bracket so that heavy tails (nu below 1) cannot throw it out
	for (let i = 0; i < 200; i += 1) {
		const excess = twoTailed(t, nu) - outside;
		if (excess > 0) low = t;
		else high = t;
		const newton = t + excess / (2 * density(t, nu));
		const next = newton > low && newton < high ? newton : (low + high) / 2;
		if (Math.abs(next - t) <= 1e-15 * Math.abs(next)) return next;
		t = next;
	}
	return t;
}
