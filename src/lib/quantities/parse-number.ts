import { QuantityProblem } from './problems';
import { parseUnit } from './units';

/** What stands in a cell, as a number. The text itself is kept elsewhere, exactly as typed. */
export interface TypedNumber {
	value: number;
	/** decimals typed: 2 for '25.30' */
	decimals: number;
	/** from '1.394(12)', which is always a standard uncertainty; null when none was typed */
	standardUncertainty: number | null;
	/** from '1.394 ± 0.012': nobody can tell whether that is a standard or an expanded uncertainty, so it is only reported */
	plusMinus: number | null;
	/** something that the reader of the number should be asked about */
	doubt: 'comma-before-three-digits' | null;
}

export type NumberReading =
	| { kind: 'empty' }
	| { kind: 'number'; number: TypedNumber }
	| { kind: 'problem'; code: 'not-a-number' | 'has-unit' | 'two-separators' | 'too-large'; message: string };

const gaps = /[\u2009\u202f\u00a0]/g;
const mantissa = String.raw`[+-]?(?:\d+(?:[.,]\d*)?|[.,]\d+)`;
const exponentPart = String.raw`(?:[eE]([+-]?\d+)|\s*[x×·*]\s*10\^?([+-]?\d+))?`;
const plain = new RegExp(`^(${mantissa})(?:\\((\\d+(?:[.,]\\d+)?)\\))?${exponentPart}$`);
const plusMinus = new RegExp(
	`^(${mantissa})\\s*(?:±|\\+/-|\\+-)\\s*((?:\\d+(?:[.,]\\d*)?|[.,]\\d+))${exponentPart}$`
);
const grouped = /^[+-]?\d{1,3}(?: \d{3})+(?:[.,]\d+)?$/;
const superscripts: Readonly<Record<string, string>> = {
	'⁰': '0',
	'¹': '1',
	'²': '2',
	'³': '3',
	'⁴': '4',
	'⁵': '5',
	'⁶': '6',
	'⁷': '7',
	'⁸': '8',
	'⁹': '9',
	'⁻': '-'
};

/**
 * Reads a typed number: decimal point or comma, true minus, thin spaces between groups of three, 1.2e-3, 1.2×10⁻³,
 * 1.394(12), 1.394 ± 0.012. Whatever else is there is a problem in words; nothing is guessed or cut off.
 */
export function parseTypedNumber(typed: string): NumberReading {
	let text = typed
		.trim()
		.replace(gaps, ' ')
		.replace(/\u2212/g, '-');
	if (text === '') return { kind: 'empty' };
	text = text.replace(
		/10([⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+)/u,
		(_, run: string) => '10^' + [...run].map((sign) => superscripts[sign] ?? '').join('')
	);
	if (grouped.test(text)) text = text.replace(/ /g, '');
	if (/\d,\d{3}\.\d|\d\.\d{3},\d/.test(text)) {
		return problem(
			'two-separators',
			`"${typed.trim()}" has a comma and a point. Type it with one decimal sign and no other.`
		);
	}
	const simple = plain.exec(text);
	if (simple) return read(typed, simple[1] ?? '', simple[2], undefined, simple[3] ?? simple[4]);
	const ranged = plusMinus.exec(text);
	if (ranged) return read(typed, ranged[1] ?? '', undefined, ranged[2], ranged[3] ?? ranged[4]);
	const unit = /^[+-]?[\d.,]*\d\s*([%°ºµμ\p{L}][\p{L}\d/ ()^-]*)$/u.exec(text)?.[1];
	if (unit !== undefined && isUnit(unit)) {
		return problem(
			'has-unit',
			`"${typed.trim()}" carries "${unit}". The column has its unit already: type the number alone.`
		);
	}
	return problem('not-a-number', `"${typed.trim()}" is not a number.`);
}

function read(
	typed: string,
	digits: string,
	inParentheses: string | undefined,
	range: string | undefined,
	power: string | undefined
): NumberReading {
	const decimal = digits.replace(',', '.');
	const fraction = /\.(\d*)$/.exec(decimal)?.[1] ?? '';
	const exponent = power === undefined ? 0 : Number(power);
	const scaled = (text: string, shift: number) => Number(`${text.replace(',', '.')}e${shift}`);
	const value = scaled(decimal, exponent);
	if (!Number.isFinite(value))
		return problem('too-large', `"${typed.trim()}" is larger than any number that can be kept.`);
	let standardUncertainty: number | null = null;
	if (inParentheses !== undefined) {
		// digits in parentheses count in the last place; with a decimal sign of their own they stand as they are
		standardUncertainty = /[.,]/.test(inParentheses)
			? scaled(inParentheses, exponent)
			: scaled(inParentheses, exponent - fraction.length);
	}
	return {
		kind: 'number',
		number: {
			value,
			decimals: fraction.length,
			standardUncertainty,
			plusMinus: range === undefined ? null : scaled(range, exponent),
			doubt: /^[+-]?[1-9]\d{0,2},\d{3}$/.test(digits) ? 'comma-before-three-digits' : null
		}
	};
}

function problem(
	code: 'not-a-number' | 'has-unit' | 'two-separators' | 'too-large',
	message: string
): NumberReading {
	return { kind: 'problem', code, message };
}

function isUnit(text: string): boolean {
	try {
		parseUnit(text);
		return true;
	} catch (cause) {
		if (cause instanceof QuantityProblem) return false;
		throw cause;
	}
}
