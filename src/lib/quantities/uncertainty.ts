import type { Component, LinearParts, Quantity } from './quantity';

export interface Uncertainty {
	/** combined standard uncertainty, SI */
	readonly standard: number;
	/** effective, by Welch-Satterthwaite; Infinity when nothing was estimated from scatter */
	readonly degreesOfFreedom: number;
}

/** Variance by component, in the order in which the components came in. */
export function componentVariances(parts: LinearParts): Map<Component, number> {
	const sums = new Map<Component, number>();
	for (const [{ component }, part] of parts) sums.set(component, (sums.get(component) ?? 0) + part * part);
	return sums;
}

/**
 * Combined standard uncertainty and effective degrees of freedom (GUM G.4.1), one term for each variance estimate:
 * slope and intercept of one fit rest on the same residual scatter and count once.
 */
export function combinedUncertainty(quantity: Quantity): Uncertainty {
	return combineVariances(componentVariances(quantity.parts));
}

export function combineVariances(variances: ReadonlyMap<Component, number>): Uncertainty {
	let total = 0;
	for (const size of variances.values()) total += size;
	if (total === 0) return { standard: 0, degreesOfFreedom: Infinity };
	let denominator = 0;
	for (const [component, size] of variances) {
		const share = size / total;
		if (component.degreesOfFreedom !== Infinity) denominator += (share * share) / component.degreesOfFreedom;
	}
	return { standard: Math.sqrt(total), degreesOfFreedom: denominator === 0 ? Infinity : 1 / denominator };
}

export interface BudgetEntry {
	readonly component: Component;
	/** standard uncertainty that it contributes, SI */
	readonly contribution: number;
	/** of the variance; all shares add to 1 */
	readonly share: number;
}

/** Which component contributes how much, largest first. */
export function budget(quantity: Quantity): BudgetEntry[] {
	const variances = [...componentVariances(quantity.parts)];
	const total = variances.reduce((sum, [, size]) => sum + size, 0);
	return variances
		.map(([component, size]) => ({ component, contribution: Math.sqrt(size), share: size / total }))
		.sort((a, b) => b.share - a.share);
}
