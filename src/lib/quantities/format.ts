import { isGlued, unitHtml, unitSpeech, unitTex, unitText } from './unit-text';
import { roundToUncertainty, type RoundedNumber } from './rounding';
import type { Unit } from './units';

/** One value in the four forms in which it is told. Rounding happens here and nowhere else. */
export interface DisplayForms {
	text: string;
	tex: string;
	html: string;
	speech: string;
}

const minus = '\u2212';
const thinSpace = '\u2009';

/** A value (in `unit`) with its standard uncertainty as `41.6(6) kJ/mol` and its siblings. */
export function formatQuantity(value: number, standardUncertainty: number | null, unit: Unit): DisplayForms {
	return formatRounded(roundToUncertainty(value, standardUncertainty), unit);
}

/** A number as it was typed or tabulated, digits kept. */
export function formatTyped(decimalText: string, unit: Unit): DisplayForms {
	return formatRounded({ mantissa: decimalText, exponent: 0, inLastDigits: null, uncertainty: null }, unit);
}

/**
 * A value with what is behind its plus-minus: '(41.6 ± 0.6) kJ/mol'. Both in `unit`. Which kind of uncertainty it is does
 * not show: tell it at the first use, with `formatStated`.
 */
export function formatPlusMinus(value: number, size: number, unit: Unit): DisplayForms {
	const { mantissa, exponent, uncertainty } = roundToUncertainty(value, size);
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
