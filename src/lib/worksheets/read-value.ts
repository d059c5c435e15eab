import {
	exactly,
	intervalUnit,
	parseTypedNumber,
	parseUnit,
	withDeviations,
	type Quantity,
	type TypedNumber
} from '$lib/quantities';
import type { Deviation, Sources, Standing } from './sources';
import type { ColumnDefinition, ParameterDefinition, Problem } from './types';

type Definition = Pick<
	ColumnDefinition | ParameterDefinition,
	'name' | 'label' | 'unit' | 'resolution' | 'uncertainty' | 'plausible'
>;

/** In SI. Far beyond anything measured, and far enough from the largest number for squares of products. */
const largestValue = 1e60;

export interface ValueReading {
	/** null when there is none or it cannot be read */
	quantity: Quantity | null;
	empty: boolean;
	problems: Pick<Problem, 'severity' | 'code' | 'message'>[];
}

/**
 * One typed text as a quantity with the uncertainty components of its column. `address` says where it stands, as
 * people say it ('Row 7, p').
 */
export function readValue(
	typed: string,
	definition: Definition,
	address: string,
	standing: Standing,
	sources: Sources
): ValueReading {
	const reading = parseTypedNumber(typed);
	if (reading.kind === 'empty') return { quantity: null, empty: true, problems: [] };
	if (reading.kind === 'problem') {
		const message = `${address}: ${reading.message} Kept as typed.`;
		return { quantity: null, empty: false, problems: [{ severity: 'error', code: reading.code, message }] };
	}
	const { number } = reading;
	const unit = parseUnit(definition.unit);
	const value = exactly(number.value, unit);
	if (!(Math.abs(value.value) < largestValue)) {
		const message = `${address}: "${typed.trim()}" is larger than any quantity here. Kept as typed.`;
		return { quantity: null, empty: false, problems: [{ severity: 'error', code: 'too-large', message }] };
	}
	const deviations = deviationsOf(number, definition, standing, sources);
	const quantity = withDeviations(
		value,
		deviations.map(({ source, size, acts }) => [
			source,
			acts === 'gain' ? size * number.value * unit.factor : size
		])
	);
	return { quantity, empty: false, problems: doubts(number, typed, definition, address) };
}

function deviationsOf(
	number: TypedNumber,
	definition: Definition,
	standing: Standing,
	sources: Sources
): Deviation[] {
	const factor = intervalUnit(parseUnit(definition.unit)).factor;
	const shared = definition.uncertainty.filter(({ scope }) => scope !== 'reading');
	const deviations = shared.map((component) => sources.deviation(component, standing));
	if (number.standardUncertainty !== null) {
		// who states an uncertainty with the reading knows its scatter; the instrument's shared part stays
		return [...deviations, sources.stated(number.standardUncertainty * factor, standing, definition.label)];
	}
	for (const component of definition.uncertainty) {
		if (component.scope === 'reading') deviations.push(sources.deviation(component, standing));
	}
	if (definition.resolution !== null) {
		deviations.push(sources.resolution(Number(definition.resolution) * factor, standing, definition.label));
	}
	return deviations;
}

function doubts(
	number: TypedNumber,
	typed: string,
	definition: Definition,
	address: string
): ValueReading['problems'] {
	const problems: ValueReading['problems'] = [];
	const text = typed.trim();
	if (number.doubt === 'comma-before-three-digits') {
		problems.push({
			severity: 'warning',
			code: 'comma-before-three-digits',
			message: `${address}: "${text}" is read as ${String(number.value)}. If thousands were meant, type it without the comma.`
		});
	}
	if (number.plusMinus !== null) {
		problems.push({
			severity: 'warning',
			code: 'plus-minus-not-stated',
			message: `${address}: "${text}" does not say what its ± is, so it is not used. For a standard uncertainty type it in parentheses, as in 1.394(12).`
		});
	}
	const range = definition.plausible;
	if (range && (number.value < range.low || number.value > range.high)) {
		problems.push({
			severity: 'warning',
			code: 'outside-plausible',
			message: `${address}: ${text} is outside ${range.low} to ${range.high} ${definition.unit}. Look again.`
		});
	}
	return problems;
}
