import {
	combinedUncertainty,
	coverageFactor,
	covariance,
	divide,
	propagate,
	subtract,
	variance,
	withDeviations,
	type Component,
	type Quantity,
	type Unit
} from '$lib/quantities';
import type { ModelFit } from './fit-types';
import type { LineFit } from './line';
import { FitProblem } from './problems';

export interface InverseOptions {
	/** `y` is the mean of so many new readings that scatter as the fit's own points do (unit weight, policy 'scatter') */
	newReadings?: number;
}

/**
 * The x at which the line reaches y: (y - intercept) / slope, with slope and intercept correlated as the fit left
 * them. A y that is exactly known (a standard pressure) adds nothing, and no scatter of a new reading is added either
 * unless asked for: the question is where the line passes, not where the next reading would fall.
 */
export function inversePrediction(fit: LineFit, y: Quantity, options: InverseOptions = {}): Quantity {
	return divide(subtract(scattered(fit, y, options), fit.intercept), fit.slope);
}

/** A new reading's scatter rests on the same variance estimate as the line's. */
function scattered(fit: LineFit, y: Quantity, { newReadings }: InverseOptions): Quantity {
	const component = scatterOf(fit);
	const deviation = fit.residualStandardDeviation;
	if (!newReadings || !component || deviation === null) return y;
	return withDeviations(y, [[{ component }, deviation / Math.sqrt(newReadings)]]);
}

function scatterOf(fit: LineFit): Component | undefined {
	return [...fit.slope.parts.keys()].find(({ component }) => component.id === `${fit.id}:scatter`)?.component;
}

/**
 * The interval of x (SI) in which the line reaches y with the probability given, for a slope of any uncertainty
 * (Fieller 1954): all x at which the line's height differs from y by less than its expanded uncertainty. It is not
 * symmetric about the estimate; null where the slope may be zero, so that the interval has no end.
 */
export function inverseInterval(
	fit: LineFit,
	y: Quantity,
	probability: number,
	options: InverseOptions = {}
): { low: number; high: number } | null {
	const target = scattered(fit, y, options);
	const estimate = inversePrediction(fit, y, options);
	// height over the target at the centre, and how it varies with the slope
	const above = subtract(fit.centre, { ...target, point: false, unit: fit.centre.unit });
	const factor = coverageFactor(probability, combinedUncertainty(estimate).degreesOfFreedom);
	const t2 = factor * factor;
	const slope = fit.slope.value;
	const a = slope * slope - t2 * variance(fit.slope);
	const b = above.value * slope - t2 * covariance(above, fit.slope);
	const c = above.value * above.value - t2 * variance(above);
	if (!(a > 0)) return null;
	const root = Math.sqrt(Math.max(0, b * b - a * c));
	return { low: fit.centreX + (-b - root) / a, high: fit.centreX + (-b + root) / a };
}

const mostHalvings = 200;

/**
 * The x between `from` and `to` (SI) at which a fitted curve of one input reaches y, told in the unit of x given, with
 * the linear parts of y and of the curve. The curve is taken to pass y once in between.
 * @throws FitProblem 'not-finite' where it does not pass y there, or lies level where it does
 */
export function inverseOnCurve(
	fit: ModelFit,
	y: Quantity,
	{ from, to, unit }: { from: number; to: number; unit: Unit }
): Quantity {
	const above = (x: number) => fit.quantityAt([x]).value - y.value;
	const rising = above(to) > above(from);
	if (!(above(from) * above(to) <= 0)) {
		throw new FitProblem('not-finite', 'The curve does not reach that value between these ends.');
	}
	let [low, high] = [from, to];
	for (let round = 0; round < mostHalvings; round += 1) {
		const middle = low + (high - low) / 2;
		if (middle === low || middle === high) break;
		if (above(middle) > 0 === rising) high = middle;
		else low = middle;
	}
	const x = Math.abs(above(low)) < Math.abs(above(high)) ? low : high;
	// cube root of the rounding unit: where a central difference loses least
	const step = 6e-6 * (to - from);
	const slope = (above(x + step) - above(x - step)) / (2 * step);
	if (!(slope !== 0) || !Number.isFinite(slope)) {
		throw new FitProblem('not-finite', 'The curve lies level there, so that no x can be told.');
	}
	return propagate(x, unit.dimension, [[y, 1 / slope], [fit.quantityAt([x]), -1 / slope]], unit); // prettier-ignore
}
