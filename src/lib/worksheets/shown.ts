import {
	budget,
	combinedUncertainty,
	coverageFactor,
	differenceIn,
	formatQuantity,
	formatTyped,
	parseUnit,
	toldIn,
	unitText,
	valueIn,
	type Quantity
} from '$lib/quantities';
import type { BudgetLine, ShownQuantity } from './types';

/** Coverage of every expanded uncertainty shown. */
export const coverage = 0.95;

export interface Naming {
	name: string;
	label: string;
	symbol: string;
	/** unit it is told in */
	unit: string;
}

/** A quantity with everything that a page shows of it. `typed` keeps the digits of what was typed or tabulated. */
export function showQuantity(
	quantity: Quantity,
	{ name, label, symbol, unit: unitName }: Naming,
	typed?: string
): ShownQuantity {
	const unit = parseUnit(unitName);
	const told = toldIn(quantity, unit);
	const { standard, degreesOfFreedom } = combinedUncertainty(told);
	const u = standard === 0 ? null : differenceIn(standard, unit);
	const plain = plainDigits(typed);
	// on a Celsius scale 83.27 would come back as 83.26999999999998
	const value = plain === null ? valueIn(told) : Number(plain);
	const factor = u === null ? null : coverageFactor(coverage, degreesOfFreedom);
	return {
		name,
		label,
		symbol,
		value,
		unit: unitText(unit),
		standardUncertainty: u,
		degreesOfFreedom: u === null ? null : finiteOrNull(degreesOfFreedom),
		coverageFactor: factor,
		expanded95: u === null || factor === null ? null : factor * u,
		display: plain === null ? formatQuantity(value, u, unit) : formatTyped(plain, unit),
		budget: showBudget(told)
	};
}

export function showBudget(quantity: Quantity): BudgetLine[] {
	return budget(quantity).map(({ component, contribution, share }) => ({
		source: component.id,
		label: component.label,
		contribution: differenceIn(contribution, quantity.unit),
		share,
		degreesOfFreedom: finiteOrNull(component.degreesOfFreedom)
	}));
}

/** The typed text where it is bare digits; null for a power of ten or an uncertainty in parentheses, told in the house form. */
export function plainDigits(typed: string | undefined): string | null {
	const plain = typed
		?.trim()
		.replace(',', '.')
		.replace(/\u2212/g, '-');
	return plain !== undefined && /^-?\d+(\.\d+)?$/.test(plain) ? plain : null;
}

/** JSON has no infinity: null stands for it. */
export function finiteOrNull(value: number): number | null {
	return Number.isFinite(value) ? value : null;
}
