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

/**
 * Lentz's continued fraction of the incomplete beta function (Abramowitz and Stegun 26.5.8); the function itself is
 * this times x^a (1 - x)^b / (a B(a, b)). Converges fast for x below (a + 1) / (a + b + 2).
 */
function betaFraction(x: number, a: number, b: number): number {
	const tiny = 1e-300;
	const away = (value: number) => (Math.abs(value) < tiny ? tiny : value);
	let c = 1;
	let d = 1 / away(1 - ((a + b) * x) / (a + 1));
	let value = d;
	for (let m = 1; m <= 10_000; m += 1) {
		const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
		d = 1 / away(1 + even * d);
		c = away(1 + even / c);
		value *= d * c;
		const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
		d = 1 / away(1 + odd * d);
		c = away(1 + odd / c);
		const step = d * c;
		value *= step;
		if (Math.abs(step - 1) < 2e-16) break;
	}
	return value;
}

/** Student's distribution for one nu: the gamma functions are worked out once, not at every t. */
class StudentDistribution {
	private readonly logBeta: number;

	constructor(private readonly nu: number) {
		// ln B(nu/2, 1/2); ln gamma(1/2) = ln(pi)/2
		this.logBeta = logGamma(nu / 2) + 0.5723649429247001 - logGamma((nu + 1) / 2);
	}

	/** Probability of a |t| above the given one. */
	outside(t: number): number {
		const { nu } = this;
		const [a, b] = [nu / 2, 0.5];
		const x = nu / (nu + t * t);
		const rest = (t * t) / (nu + t * t);
		const front = exp(a * ln(x) + b * ln(rest) - this.logBeta);
		if (x < (a + 1) / (a + b + 2)) return (front * betaFraction(x, a, b)) / a;
		return 1 - (front * betaFraction(rest, b, a)) / b;
	}

	density(t: number): number {
		return exp(-this.logBeta - 0.5 * ln(this.nu) - ((this.nu + 1) / 2) * ln(1 + (t * t) / this.nu));
	}
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

/** Normal quantiles by coverage: worked out once for each coverage, which is nearly always 0.95. */
const normalQuantiles = new Map<number, number>();

function normalQuantile(coverage: number): number {
	const kept = normalQuantiles.get(coverage);
	if (kept !== undefined) return kept;
	const known = quantileByNewton(coverage, manyDegreesOfFreedom, 1);
	let z = known;
	for (let i = 0; i < 20; i += 1) z = known - fisherExpansion(z, manyDegreesOfFreedom);
	normalQuantiles.set(coverage, z);
	return z;
}

/** The factor k for a two-sided interval of the given coverage, e.g. 0.95; degreesOfFreedom may be fractional or Infinity. */
export function coverageFactor(coverage: number, degreesOfFreedom: number): number {
	const z = normalQuantile(coverage);
	if (degreesOfFreedom === Infinity) return z;
	const near = z + fisherExpansion(z, degreesOfFreedom);
	return degreesOfFreedom > manyDegreesOfFreedom ? near : quantileByNewton(coverage, degreesOfFreedom, near);
}

function quantileByNewton(coverage: number, nu: number, start: number): number {
	const student = new StudentDistribution(nu);
	const wanted = 1 - coverage;
	let low = 0;
	let high = Infinity;
	let t = start;
	// Newton, kept inside a bracket so that heavy tails (nu below 1) cannot throw it out
	for (let i = 0; i < 400; i += 1) {
		const excess = student.outside(t) - wanted;
		if (excess > 0) low = t;
		else high = t;
		const newton = t + excess / (2 * student.density(t));
		const inside = newton > low && newton < high;
		const next = inside ? newton : high === Infinity ? 2 * t : (low + high) / 2;
		if (Math.abs(next - t) <= 1e-14 * Math.abs(next)) return next;
		t = next;
	}
	return t;
}
