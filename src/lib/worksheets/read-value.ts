import { exactly, parseTypedNumber, parseUnit, type Quantity, type TypedNumber } from '$lib/quantities';
import type { Sources, Standing } from './sources';
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
	const own = number.value * unit.factor;
	const parts = sources.partsOf(definition, standing, own, number.standardUncertainty);
	return {
		quantity: { ...value, parts },
		empty: false,
		problems: doubts(number, typed, definition, address)
	};
}

const noDoubts: ValueReading['problems'] = [];

function doubts(
	number: TypedNumber,
	typed: string,
	definition: Definition,
	address: string
): ValueReading['problems'] {
	const range = definition.plausible;
	const outside = range && (number.value < range.low || number.value > range.high);
	if (number.doubt === null && number.plusMinus === null && !outside) return noDoubts;
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
	if (outside) {
		problems.push({
			severity: 'warning',
			code: 'outside-plausible',
			message: `${address}: ${text} is outside ${range.low} to ${range.high} ${definition.unit}. Look again.`
		});
	}
	return problems;
}
