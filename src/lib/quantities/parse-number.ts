import { parseStated } from './parse-stated';
import { standardOf } from './stated-kind';
import { unitText } from './unit-text';

/** What stands in a cell, as a number. The text itself is kept elsewhere, exactly as typed. */
export interface TypedNumber {
	value: number;
	/** decimals typed: 2 for '25.30' */
	decimals: number;
	/** from '1.394(12)', which is always one, or from a ± that says its kind; null when none was typed */
	standardUncertainty: number | null;
	/** from '1.394 ± 0.012': nobody can tell whether that is a standard or an expanded uncertainty, so it is only reported;
	 * so is an expanded one without its k */
	plusMinus: number | null;
	/** something that the reader of the number should be asked about */
	doubt: 'comma-before-three-digits' | null;
}

export type NumberReading =
	| { kind: 'empty' }
	| { kind: 'number'; number: TypedNumber }
	| { kind: 'problem'; code: NumberProblemCode; message: string };

export type NumberProblemCode = 'not-a-number' | 'has-unit' | 'two-separators' | 'two-readings' | 'too-large';

/**
 * Reads a typed number: decimal point or comma, true minus, thin spaces between groups of three, 1.2e-3, 1.2×10⁻³,
 * 1.394(12), 1.394 ± 0.012 with or without its kind, (1.394 ± 0.012) × 10³. Whatever else is there is a problem in
 * words; nothing is guessed or cut off.
 */
export function parseTypedNumber(typed: string): NumberReading {
	const plain = plainDecimal.exec(typed);
	if (plain) {
		const decimals = plain[2] ?? plain[3] ?? '';
		return plainNumberOf(Number(`${plain[1]}.${decimals}0`), decimals.length);
	}
	const reading = parseStated(typed);
	if (reading.kind === 'empty') return reading;
	const shown = typed.trim();
	if (reading.kind === 'problem') {
		if (reading.code !== 'unknown-unit' && reading.code !== 'not-a-number') {
			return problem(reading.code, reading.message);
		}
		return problem('not-a-number', `"${shown}" is not a number.`);
	}
	const { value, decimals, unit, uncertainty, doubt } = reading.quantity;
	if (unit) {
		return problem(
			'has-unit',
			`"${shown}" carries "${unitText(unit)}". The column has its unit already: type the number alone.`
		);
	}
	const standard = uncertainty && standardOf(uncertainty);
	return {
		kind: 'number',
		number: {
			value,
			decimals,
			standardUncertainty: standard,
			plusMinus: uncertainty && standard === null ? uncertainty.size : null,
			doubt
		}
	};
}

/** Nearly every cell is one, and a table has thousands. A comma before three digits goes the long way: it is asked about. */
const plainDecimal = /^(-?\d{1,15})(?:\.(\d{1,15})|,(\d{1,2}|\d{4,15}))?$/;

function plainNumberOf(value: number, decimals: number): NumberReading {
	return {
		kind: 'number',
		number: { value, decimals, standardUncertainty: null, plusMinus: null, doubt: null }
	};
}

function problem(code: NumberProblemCode, message: string): NumberReading {
	return { kind: 'problem', code, message };
}
