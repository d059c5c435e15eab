import { isGlued, unitHtml, unitSpeech, unitTex, unitText } from './unit-text';
import type { Unit } from './units';

/** One value in the four forms in which it is told. Rounding happens here and nowhere else. */
export interface DisplayForms {
	text: string;
	tex: string;
	html: string;
	speech: string;
}

/** A value cut to its digits: value = mantissa * 10^exponent, the uncertainty in units of the last digit shown. */
export interface RoundedNumber {
	/** with a plain hyphen as minus: '41.60' */
	mantissa: string;
	exponent: number;
	/** '25' for (25) in the last digits; null without uncertainty */
	inLastDigits: string | null;
	/** the uncertainty on the mantissa's scale: '0.25' */
	uncertainty: string | null;
}

const minus = '\u2212';
const thinSpace = '\u2009';

/** Digits shown of a value whose uncertainty is not stated: enough to compute on, few enough to read. */
const digitsWithoutUncertainty = 6;

/** Decimal digits that a binary double carries. */
const mostDigits = 15;

/**
 * Rounds to the uncertainty (GUM 7.2.6: one or two digits). Two where the first digit is 1 or 2, one elsewhere
 * (common practice), so that rounding never changes the uncertainty by more than a sixth.
 */
export function roundToUncertainty(value: number, standardUncertainty: number | null): RoundedNumber {
	const u = standardUncertainty;
	if (u === null || !(u > 0) || !Number.isFinite(u)) return roundToDigits(value, digitsWithoutUncertainty);
	const digits = significantDigits(u);
	const lastPlace = placeOfFirstDigit(Number(u.toPrecision(digits))) - digits + 1;
	const size = Math.max(placeOfFirstDigit(value), placeOfFirstDigit(u));
	// an uncertainty below the last bit of the value cannot be shown in its digits
	if (size - lastPlace > mostDigits) return roundToDigits(value, mostDigits);
	// A power of ten where the last digit shown would be left of the decimal sign, or the value is tiny or huge.
	const exponent = lastPlace > 0 || size < -3 || size > 5 ? size : 0;
	const decimals = Math.max(0, exponent - lastPlace);
	const uncertainty = scaleByTen(u, -exponent).toFixed(decimals);
	return {
		mantissa: dropNegativeZero(scaleByTen(value, -exponent).toFixed(decimals)),
		exponent,
		inLastDigits: uncertainty.replace('.', '').replace(/^0+(?=\d)/, ''),
		uncertainty
	};
}

function significantDigits(u: number): 1 | 2 {
	const first = u.toExponential(1).charAt(0);
	return first === '1' || first === '2' ? 2 : 1;
}

/** Shortest form of at most `digits` significant digits, zeros at the end dropped. */
export function roundToDigits(value: number, digits: number): RoundedNumber {
	const rounded = Number(value.toPrecision(digits));
	const size = placeOfFirstDigit(rounded);
	const exponent = rounded !== 0 && (size < -3 || size > Math.max(5, digits - 1)) ? size : 0;
	const decimals = Math.max(0, digits - 1 - (size - exponent));
	const fixed = scaleByTen(rounded, -exponent).toFixed(Math.min(decimals, 100));
	const mantissa = fixed.includes('.') ? fixed.replace(/0+$/, '').replace(/\.$/, '') : fixed;
	return { mantissa: dropNegativeZero(mantissa), exponent, inLastDigits: null, uncertainty: null };
}

/** Power of ten of the first digit: 1 for 41.6, -3 for 0.0025; 0 for zero. */
export function placeOfFirstDigit(value: number): number {
	return value === 0 ? 0 : Number(value.toExponential(15).split('e')[1] ?? '0');
}

/** value * 10^power with a single rounding, by way of the decimal text. */
function scaleByTen(value: number, power: number): number {
	if (power === 0) return value;
	const [digits = '0', exponent = '0'] = value.toExponential().split('e');
	return Number(`${digits}e${Number(exponent) + power}`);
}

function dropNegativeZero(text: string): string {
	return /^-0(?:\.0*)?$/.test(text) ? text.slice(1) : text;
}

/** A value (in `unit`) with its standard uncertainty as `41.6(6) kJ/mol` and its siblings. */
export function formatQuantity(value: number, standardUncertainty: number | null, unit: Unit): DisplayForms {
	return formatRounded(roundToUncertainty(value, standardUncertainty), unit);
}

/** A number as it was typed or tabulated, digits kept. */
export function formatTyped(decimalText: string, unit: Unit): DisplayForms {
	return formatRounded({ mantissa: decimalText, exponent: 0, inLastDigits: null, uncertainty: null }, unit);
}

/** A value with its expanded uncertainty: '41.6 ± 0.6 kJ/mol'. Both in `unit`. */
export function formatExpanded(value: number, expanded: number, unit: Unit): DisplayForms {
	const { mantissa, exponent, uncertainty } = roundToUncertainty(value, expanded);
	if (uncertainty === null) return formatQuantity(value, null, unit);
	const [textUnit, texUnit, htmlUnit] = unitForms(unit);
	const number = withMinus(mantissa);
	const bracket = (inside: string, scaled: string, unitPart: string) =>
		exponent === 0 && unitPart === '' ? inside : `(${inside})${scaled}${unitPart}`;
	return {
		text: bracket(`${number} ± ${uncertainty}`, powerText(exponent), textUnit),
		tex: bracket(`${mantissa} \\pm ${uncertainty}`, powerTex(exponent), texUnit),
		html: `<span class="quantity">${bracket(`${number}${thinSpace}±${thinSpace}${uncertainty}`, powerHtml(exponent), htmlUnit)}</span>`,
		speech: joinWords(
			`${sayNumber(mantissa)} plus or minus ${uncertainty}`,
			sayPower(exponent),
			unitSpeech(unit)
		)
	};
}

export function formatRounded(rounded: RoundedNumber, unit: Unit): DisplayForms {
	const { mantissa, exponent, inLastDigits, uncertainty } = rounded;
	const [textUnit, texUnit, htmlUnit] = unitForms(unit);
	const inBrackets = inLastDigits === null ? '' : `(${lastDigits(inLastDigits, uncertainty)})`;
	const number = withMinus(mantissa) + inBrackets;
	const one = mantissa === '1' && exponent === 0;
	const spokenUncertainty = uncertainty === null ? '' : `with standard uncertainty ${uncertainty}`;
	return {
		text: `${number}${powerText(exponent)}${textUnit}`,
		tex: `${mantissa}${inBrackets}${powerTex(exponent)}${texUnit}`,
		html: `<span class="quantity">${number}${powerHtml(exponent)}${htmlUnit}</span>`,
		speech: joinWords(sayNumber(mantissa), spokenUncertainty, sayPower(exponent), unitSpeech(unit, one))
	};
}

/** Digits in parentheses; where they reach past the decimal sign, as in 12.4(1.3), they keep it. */
function lastDigits(digits: string, uncertainty: string | null): string {
	return uncertainty !== null && uncertainty.includes('.') && Number(uncertainty) >= 1 ? uncertainty : digits;
}

function unitForms(unit: Unit): [string, string, string] {
	const text = unitText(unit);
	if (text === '1') return ['', '', ''];
	const glued = isGlued(unit);
	return [
		(glued ? '' : thinSpace) + text.replace(/\^(-?\d+)(?![.\d])/g, (_, digits: string) => raise(digits)),
		(glued ? '' : '~') + unitTex(unit),
		`${glued ? '' : thinSpace}<span class="unit">${unitHtml(unit)}</span>`
	];
}

/** A number alone, with a true minus and a power of ten in words of the plain text. */
export function numberText({ mantissa, exponent, inLastDigits, uncertainty }: RoundedNumber): string {
	const inBrackets = inLastDigits === null ? '' : `(${lastDigits(inLastDigits, uncertainty)})`;
	return withMinus(mantissa) + inBrackets + powerText(exponent);
}

export function withMinus(text: string): string {
	return text.replace('-', minus);
}

const raised: Readonly<Record<string, string>> = {
	'-': '⁻',
	'0': '⁰',
	'1': '¹',
	'2': '²',
	'3': '³',
	'4': '⁴',
	'5': '⁵',
	'6': '⁶',
	'7': '⁷',
	'8': '⁸',
	'9': '⁹'
};

/** Digits as Unicode superscripts, for plain text only: pages use markup. */
function raise(digits: string): string {
	return [...digits].map((sign) => raised[sign] ?? '').join('');
}

function powerText(exponent: number): string {
	return exponent === 0 ? '' : `${thinSpace}×${thinSpace}10${raise(String(exponent))}`;
}

function powerTex(exponent: number): string {
	return exponent === 0 ? '' : `\\times 10^{${exponent}}`;
}

function powerHtml(exponent: number): string {
	return exponent === 0 ? '' : `${thinSpace}×${thinSpace}10<sup>${withMinus(String(exponent))}</sup>`;
}

function sayPower(exponent: number): string {
	return exponent === 0 ? '' : `times ten to the power ${sayNumber(String(exponent))}`;
}

function sayNumber(text: string): string {
	return text.replace('-', 'minus ');
}

function joinWords(...words: string[]): string {
	return words.filter((word) => word !== '').join(' ');
}
