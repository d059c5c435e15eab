/**
 * Distribution functions for tests, by the kept library's incomplete beta and gamma functions; tails are computed as
 * tails, so that small probabilities keep their digits.
 */
import betainc from '@stdlib/math-base-special-betainc';
import erfc from '@stdlib/math-base-special-erfc';
import erfcinv from '@stdlib/math-base-special-erfcinv';
import gammainc from '@stdlib/math-base-special-gammainc';
import gammaincinv from '@stdlib/math-base-special-gammaincinv';
import betaincinv from '@stdlib/math-base-special-kernel-betaincinv';

/** Probability of a |t| above the given one, for any degrees of freedom above zero. */
export function studentOutside(t: number, degreesOfFreedom: number): number {
	if (!Number.isFinite(t)) return Number.isNaN(t) ? NaN : 0;
	if (degreesOfFreedom === Infinity) return erfc(Math.abs(t) / Math.SQRT2);
	const square = t * t;
	// the half that is small is the one computed
	return square < degreesOfFreedom
		? betainc(square / (degreesOfFreedom + square), 0.5, degreesOfFreedom / 2, true, true)
		: betainc(degreesOfFreedom / (degreesOfFreedom + square), degreesOfFreedom / 2, 0.5);
}

/** Probability of an F above the given one. */
export function fAbove(f: number, numerator: number, denominator: number): number {
	if (!(f > 0)) return Number.isNaN(f) ? NaN : 1;
	if (f === Infinity) return 0;
	const share = denominator / (denominator + numerator * f);
	return share < 0.5
		? betainc(share, denominator / 2, numerator / 2)
		: betainc((numerator * f) / (denominator + numerator * f), numerator / 2, denominator / 2, true, true);
}

/** The F that is exceeded with the given probability. */
export function fExceededBy(probability: number, numerator: number, denominator: number): number {
	const [share = NaN, rest = NaN] = betaincinv(numerator / 2, denominator / 2, 1 - probability, probability);
	return (denominator * share) / (numerator * rest);
}

/** Probability of a chi-squared above the given one. */
export function chiSquaredAbove(chiSquared: number, degreesOfFreedom: number): number {
	if (!(chiSquared > 0)) return Number.isNaN(chiSquared) ? NaN : 1;
	return gammainc(chiSquared / 2, degreesOfFreedom / 2, true, true);
}

/** The chi-squared that is exceeded with the given probability. */
export function chiSquaredExceededBy(probability: number, degreesOfFreedom: number): number {
	return 2 * gammaincinv(probability, degreesOfFreedom / 2, true);
}

/** Probability of a standard normal deviate below z. */
export function normalBelow(z: number): number {
	return 0.5 * erfc(-z / Math.SQRT2);
}

/** The z below which a standard normal deviate lies with the given probability. */
export function normalQuantile(probability: number): number {
	return -Math.SQRT2 * erfcinv(2 * probability);
}

/** Probability of a beta variate below x. */
export function betaBelow(x: number, a: number, b: number): number {
	if (x <= 0) return 0;
	return x >= 1 ? 1 : betainc(x, a, b);
}
