import {
	combinedUncertainty,
	coverageFactor,
	differenceIn,
	exactly,
	formatQuantity,
	formatRounded,
	intervalUnit,
	interpolate,
	parseUnit,
	QuantityProblem,
	roundToUncertainty,
	standardUncertainty,
	subtract,
	toldIn,
	valueIn,
	variance,
	withDeviations,
	type Component,
	type DisplayForms,
	type Quantity,
	type Unit
} from '$lib/quantities';
import type { Calculation } from './calculation';
import { coverage } from './shown';
import type { ComparisonDefinition, ShownComparison } from './types';

/** Each result that has a value, against the literature. */
export function showComparisons(calculation: Calculation): Record<string, ShownComparison> {
	const comparisons: Record<string, ShownComparison> = {};
	for (const definition of calculation.worksheet.comparisons) {
		const measured = calculation.names.get(definition.quantity);
		if (!measured) continue;
		try {
			comparisons[definition.name] = compare(
				definition,
				measured,
				referenceOf(definition, calculation),
				calculation
			);
		} catch (cause) {
			if (!(cause instanceof QuantityProblem)) throw cause;
			const message = `${definition.reference.label}: ${cause.message}`;
			calculation.problems.push({
				severity: 'warning',
				code: 'no-reference',
				message,
				name: definition.name
			});
		}
	}
	return comparisons;
}

function referenceOf({ name, reference }: ComparisonDefinition, calculation: Calculation): Quantity {
	const unit = parseUnit(reference.unit);
	let value: Quantity;
	if (reference.interpolate) {
		const { at, unit: unitAt, points } = reference.interpolate;
		const scale = parseUnit(unitAt);
		const where = calculation.names.get(at);
		if (!where) throw new QuantityProblem('domain', `It waits for ${at}.`);
		const pairs = points.map((point) => ({
			x: point.at * scale.factor + scale.offset,
			y: point.value * unit.factor + unit.offset
		}));
		value = interpolate(where, pairs, unit.dimension);
	} else value = { ...exactly(reference.value ?? NaN, unit), point: false };
	if (reference.standardUncertainty === null) return value;
	const component: Component = {
		id: `${name}:reference`,
		label: reference.label,
		scope: 'course',
		degreesOfFreedom: Infinity
	};
	return withDeviations(value, [[{ component }, reference.standardUncertainty * unit.factor]]);
}

function compare(
	definition: ComparisonDefinition,
	measured: Quantity,
	reference: Quantity,
	calculation: Calculation
): ShownComparison {
	const unit = parseUnit(definition.reference.unit);
	const difference = subtract({ ...measured, point: false }, reference);
	const { standard, degreesOfFreedom } = combinedUncertainty(difference);
	const factor = coverageFactor(coverage, degreesOfFreedom);
	const d = differenceIn(difference.value, unit);
	const u = differenceIn(standard, unit);
	const expanded = factor * u;
	const verdict = judge(d, expanded, definition.limit);
	const stated = definition.reference.standardUncertainty;
	const shownReference = showReference(
		valueIn(reference, unit),
		stated,
		differenceIn(standardUncertainty(measured), unit),
		unit
	);
	const shownMeasured = formatQuantity(
		valueIn(measured, unit),
		differenceIn(standardUncertainty(measured), unit),
		unit
	);
	return {
		name: definition.name,
		quantity: definition.quantity,
		reference: {
			value: valueIn(reference, unit),
			unit: definition.reference.unit,
			standardUncertainty: stated,
			conditions: conditionsOf(definition, calculation),
			source: definition.reference.source,
			display: shownReference
		},
		measured: shownMeasured,
		difference: d,
		standardUncertainty: u,
		expanded95: expanded,
		normalisedError: stated === null ? null : d / normaliser(measured, reference, factor, unit),
		verdict,
		sentence: sentence(
			verdict,
			shownMeasured.text,
			shownReference.text,
			d,
			expanded,
			definition.limit,
			intervalUnit(unit)
		)
	};
}

/** A reference without uncertainty is cut one digit beyond what the measurement can tell. */
function showReference(value: number, stated: number | null, measured: number, unit: Unit): DisplayForms {
	if (stated !== null || measured === 0) return formatQuantity(value, stated, unit);
	return formatRounded(
		{ ...roundToUncertainty(value, measured / 10), inLastDigits: null, uncertainty: null },
		unit
	);
}

/**
 * No detected difference is not agreement: where the expanded uncertainty is above what the experiment should reach,
 * nothing is concluded either way.
 */
function judge(difference: number, expanded: number, limit: number): ShownComparison['verdict'] {
	if (expanded === 0 || expanded > limit) return 'too uncertain to tell';
	return Math.abs(difference) <= expanded ? 'compatible' : 'not compatible';
}

/** Both expanded uncertainties with the same coverage factor, combined (ISO 13528's E_n). */
function normaliser(measured: Quantity, reference: Quantity, factor: number, unit: Unit): number {
	return differenceIn(factor * Math.sqrt(variance(measured) + variance(reference)), unit);
}

function conditionsOf({ reference }: ComparisonDefinition, calculation: Calculation): string {
	const at = reference.interpolate && calculation.names.get(reference.interpolate.at);
	if (!reference.interpolate || !at) return reference.conditions;
	const unit = parseUnit(reference.interpolate.unit);
	const text = formatQuantity(Math.round(valueIn(toldIn(at, unit)) * 10) / 10, null, unit).text;
	return `${reference.conditions}, at ${text}`;
}

function sentence(
	verdict: ShownComparison['verdict'],
	measured: string,
	reference: string,
	difference: number,
	expanded: number,
	limit: number,
	unit: Unit
): string {
	const shown = formatDifference(difference, expanded, unit);
	const bound = formatDifference(expanded, expanded, unit);
	const facts = `Measured ${measured}, reference ${reference}: a difference of ${shown}`;
	if (verdict === 'compatible') {
		return `${facts}, within its expanded uncertainty of ${bound}. Compatible: no difference was detected, and one smaller than that would not be.`;
	}
	if (verdict === 'not compatible') {
		return `${facts}, beyond its expanded uncertainty of ${bound}. Not compatible: the stated uncertainty does not explain it.`;
	}
	if (expanded === 0) return `${facts}, without any uncertainty to judge it by. Too uncertain to tell.`;
	const most = formatQuantity(limit, null, unit).text;
	return `${facts}, with an expanded uncertainty of ${bound}; above ${most} this experiment decides nothing. Too uncertain to tell.`;
}

/** A difference cut to the digits that its expanded uncertainty allows, without a parenthesis of its own. */
function formatDifference(value: number, expanded: number, unit: Unit): string {
	return formatQuantity(value, expanded, unit).text.replace(/\([^)]*\)/, '');
}
