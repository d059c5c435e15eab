import { addPart, type Quantity, type Source } from '$lib/quantities';
import { FitProblem } from './problems';

/**
 * Variance of y - fit at one point from its reading-scope parts alone, those of its inputs by the fit's slope towards
 * each (effective variance). An input that shares a source with y takes part with its sign.
 */
export function readingVariance(y: Quantity, inputs: readonly (readonly [Quantity, number])[]): number {
	if (!inputs.some(([input]) => statesOwn(input))) return ownVariance(y);
	const parts = new Map<Source, number>();
	for (const [source, part] of y.parts)
		if (source.component.scope === 'reading') addPart(parts, source, part);
	for (const [input, slope] of inputs) {
		for (const [source, part] of input.parts) {
			if (source.component.scope === 'reading') addPart(parts, source, -slope * part);
		}
	}
	let size = 0;
	for (const part of parts.values()) size += part * part;
	return size;
}

/** Whether a quantity has reading-scope parts. */
export function statesOwn({ parts }: Quantity): boolean {
	for (const { component } of parts.keys()) if (component.scope === 'reading') return true;
	return false;
}

/** Without an uncertain input no two parts can be of the same source. */
function ownVariance({ parts }: Quantity): number {
	let size = 0;
	for (const [{ component }, part] of parts) if (component.scope === 'reading') size += part * part;
	return size;
}

/** Weights of points by their stated variance. @throws FitProblem where some point states none */
export function statedWeights(variances: readonly number[]): number[] {
	if (variances.some((size) => !(size > 0))) {
		throw new FitProblem(
			'no-stated-uncertainty',
			'A weighted fit wants an uncertainty for every reading. State it in the columns.'
		);
	}
	return variances.map((size) => 1 / size);
}

/** Sum of squared residuals over the stated variances; null where some point states none. */
export function chiSquaredOf(residuals: readonly number[], variances: readonly number[]): number | null {
	if (variances.some((size) => !(size > 0))) return null;
	let sum = 0;
	residuals.forEach((residual, i) => (sum += (residual * residual) / (variances[i] ?? 1)));
	return sum;
}
