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
import { evaluateFormula } from './formula';
import { NotThere } from './lookup';
import { keyOf, rowSlugs } from './named';
import type { RowState } from './rows';
import type { Session } from './session';
import { coverage } from './shown';
import type { ComparisonDefinition, Problem, Reference, ShownComparison } from './types';

/** Each result that has a value, against the literature; what hinders one is told as a problem. */
export function showComparisons(session: Session): {
	comparisons: Record<string, ShownComparison>;
	problems: Problem[];
} {
	const comparisons: Record<string, ShownComparison> = {};
	const problems: Problem[] = [];
	for (const { definition, reference, name, group, row, measured } of compared(session)) {
		const naming = group === null ? { name } : { name, group };
		try {
			const against = referenceOf(name, reference, session, row);
			comparisons[name] = { ...compare(definition, reference, measured, against, session, row), ...naming };
		} catch (cause) {
			if (!(cause instanceof QuantityProblem) && !(cause instanceof NotThere)) throw cause;
			const reason = cause instanceof NotThere ? `It waits for ${cause.what}.` : cause.message;
			const message = `${reference.label}: ${reason}`;
			problems.push({ severity: 'warning', code: 'no-reference', message, ...naming });
		}
	}
	return { comparisons, problems };
}

interface Compared {
	definition: ComparisonDefinition;
	reference: Reference;
	/** 'T_b', 'gamma.argon' */
	name: string;
	group: string | null;
	row: RowState | null;
	measured: Quantity;
}

function* compared(session: Session): Generator<Compared> {
	for (const definition of session.worksheet.comparisons) {
		const { reference, references, name, quantity } = definition;
		if (reference) {
			const measured = session.names.get(quantity);
			if (measured) yield { definition, reference, name, group: null, row: null, measured };
			continue;
		}
		const per = session.worksheet.results.find((result) => result.name === quantity)?.per ?? '';
		for (const [row, slug] of rowSlugs(session, per)) {
			const key = keyOf(session.worksheet, row);
			const own = Object.hasOwn(references, slug) ? references[slug] : undefined;
			const measured = row.values.get(quantity);
			if (own && measured)
				yield { definition, reference: own, name: `${name}.${slug}`, group: key, row, measured };
		}
	}
}

function referenceOf(name: string, reference: Reference, session: Session, row: RowState | null): Quantity {
	const unit = parseUnit(reference.unit);
	let value: Quantity;
	if (reference.interpolate) {
		const { at, unit: unitAt, points } = reference.interpolate;
		const scale = parseUnit(unitAt);
		const where = row?.values.get(at) ?? session.names.get(at);
		if (!where) throw new NotThere(at);
		const pairs = points.map((point) => ({
			x: point.at * scale.factor + scale.offset,
			y: point.value * unit.factor + unit.offset
		}));
		value = interpolate(where, pairs, unit.dimension);
	} else if (reference.formula) value = evaluateFormula(reference.formula, session.surroundings(row));
	else value = { ...exactly(reference.value ?? NaN, unit), point: false };
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
	source: Reference,
	measured: Quantity,
	reference: Quantity,
	session: Session,
	row: RowState | null
): ShownComparison {
	const unit = parseUnit(source.unit);
	const difference = subtract({ ...measured, point: false }, reference);
	const { standard, degreesOfFreedom } = combinedUncertainty(difference);
	const factor = coverageFactor(coverage, degreesOfFreedom);
	const d = differenceIn(difference.value, unit);
	const u = differenceIn(standard, unit);
	const expanded = factor * u;
	const verdict = judge(d, expanded, definition.limit);
	const stated = source.standardUncertainty;
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
			unit: source.unit,
			standardUncertainty: stated,
			conditions: conditionsOf(source, session, row),
			source: source.source,
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

function conditionsOf(reference: Reference, session: Session, row: RowState | null): string {
	const name = reference.interpolate?.at ?? '';
	const at = row?.values.get(name) ?? session.names.get(name);
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
