import { ln, pi, pow, sin } from './elementary';
import { QuantityProblem } from './problems';
import type { RandomSource } from './random';

/** What is known of one input, as a distribution (JCGM 101:2008, 6.4 and table 1). */
export type Distribution =
	| { shape: 'normal'; mean: number; standard: number }
	| { shape: 'rectangular'; low: number; high: number }
	| { shape: 'triangular'; low: number; high: number }
	/** `ratio` of the upper side to the lower one, from 0 (triangular) to 1 (rectangular) */
	| { shape: 'trapezoidal'; low: number; high: number; ratio: number }
	/** rectangular with ends that are known to within plus or minus `wander` only */
	| { shape: 'curvilinear-trapezoidal'; low: number; high: number; wander: number }
	/** U-shaped: a cycle seen at an unknown moment */
	| { shape: 'arcsine'; low: number; high: number }
	/** scaled and shifted t; `scale` is the standard deviation of the mean, not of t */
	| { shape: 'student'; mean: number; scale: number; degreesOfFreedom: number };

/** One number drawn from the distribution. */
export function draw(distribution: Distribution, random: RandomSource): number {
	switch (distribution.shape) {
		case 'normal':
			return distribution.mean + distribution.standard * random.normal();
		case 'student': {
			const { mean, scale, degreesOfFreedom: nu } = distribution;
			if (nu === Infinity) return mean + scale * random.normal();
			return mean + scale * random.normal() * Math.sqrt(nu / chiSquared(nu, random));
		}
		case 'rectangular':
			return between(distribution.low, distribution.high, random.uniform());
		case 'triangular':
			return between(distribution.low, distribution.high, (random.uniform() + random.uniform()) / 2);
		case 'trapezoidal': {
			const { low, high, ratio } = distribution;
			const share = ((1 + ratio) * random.uniform() + (1 - ratio) * random.uniform()) / 2;
			return between(low, high, share);
		}
		case 'curvilinear-trapezoidal': {
			const { low, high, wander } = distribution;
			const from = low - wander + 2 * wander * random.uniform();
			return between(from, low + high - from, random.uniform());
		}
		case 'arcsine': {
			const { low, high } = distribution;
			return (low + high) / 2 + ((high - low) / 2) * sin(2 * pi * random.uniform());
		}
	}
}

/** Standard uncertainty of the distribution; infinite where it has none (t with two degrees of freedom or fewer). */
export function standardDeviationOf(distribution: Distribution): number {
	switch (distribution.shape) {
		case 'normal':
			return distribution.standard;
		case 'student': {
			const { scale, degreesOfFreedom: nu } = distribution;
			if (nu === Infinity) return scale;
			return nu > 2 ? scale * Math.sqrt(nu / (nu - 2)) : Infinity;
		}
		case 'rectangular':
			return (distribution.high - distribution.low) / Math.sqrt(12);
		case 'triangular':
			return (distribution.high - distribution.low) / Math.sqrt(24);
		case 'trapezoidal':
			return (distribution.high - distribution.low) * Math.sqrt((1 + square(distribution.ratio)) / 24);
		case 'curvilinear-trapezoidal':
			return Math.sqrt(square(distribution.high - distribution.low) / 12 + square(distribution.wander) / 9);
		case 'arcsine':
			return (distribution.high - distribution.low) / Math.sqrt(8);
	}
}

/** @throws QuantityProblem where the numbers make no distribution of that shape */
export function requireDistribution(distribution: Distribution): void {
	const problem = (message: string) => new QuantityProblem('distribution', message);
	const { shape, ...numbers } = distribution;
	for (const [name, value] of Object.entries(numbers)) {
		const infinite = name === 'degreesOfFreedom' && value === Infinity;
		if (!Number.isFinite(value) && !infinite)
			throw problem(`The ${name} of a ${shape} distribution is a number.`);
	}
	if ('low' in distribution && distribution.low > distribution.high) {
		throw problem(`A ${shape} distribution runs from the lower end to the higher one.`);
	}
	if (distribution.shape === 'normal' && distribution.standard < 0) {
		throw problem('A standard uncertainty is not negative.');
	}
	if (distribution.shape === 'student' && !(distribution.scale >= 0 && distribution.degreesOfFreedom > 0)) {
		throw problem('A t distribution wants a scale that is not negative, and degrees of freedom above zero.');
	}
	if (distribution.shape === 'trapezoidal' && !(distribution.ratio >= 0 && distribution.ratio <= 1)) {
		throw problem('The ratio of a trapezoid lies from 0 to 1.');
	}
	if (distribution.shape === 'curvilinear-trapezoidal') {
		const { low, high, wander } = distribution;
		if (!(wander >= 0 && 2 * wander <= high - low)) {
			throw problem('The ends of a curvilinear trapezoid do not wander past its middle.');
		}
	}
}

function square(x: number): number {
	return x * x;
}

function between(low: number, high: number, share: number): number {
	return low + (high - low) * share;
}

/** Chi-squared for any degrees of freedom: twice a gamma variate (G. Marsaglia and W. W. Tsang, ACM TOMS 26 (2000) 363). */
function chiSquared(nu: number, random: RandomSource): number {
	const shape = nu / 2;
	if (shape < 1) {
		// the same paper's note for small shapes
		return 2 * gammaVariate(shape + 1, random) * pow(random.uniform(), 1 / shape);
	}
	return 2 * gammaVariate(shape, random);
}

function gammaVariate(shape: number, random: RandomSource): number {
	const d = shape - 1 / 3;
	const c = 1 / Math.sqrt(9 * d);
	for (;;) {
		const x = random.normal();
		const root = 1 + c * x;
		if (root <= 0) continue;
		const v = root * root * root;
		if (ln(random.uniform()) < (x * x) / 2 + d - d * v + d * ln(v)) return d * v;
	}
}
