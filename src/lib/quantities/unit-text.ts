import { prefixFactors } from './unit-table';
import { entryOf, type UnitFactor } from './unit-reader';
import type { Unit } from './units';

const thinSpace = '\u2009';
const minus = '\u2212';

/** A sign such as ° stands alone; in a product its place is taken by the symbol, deg. */
function isSign(unit: Unit): boolean {
	const [only, ...others] = unit.factors;
	return only !== undefined && others.length === 0 && only.exponent === 1 && entryOf(only.base).sign === true;
}

/** Whether a number and the unit stand together without a space (ISO 80000-1: degrees of angle alone). */
export function isGlued(unit: Unit): boolean {
	return isSign(unit);
}

type Form = 'text' | 'tex' | 'html';

function symbolIn(form: Form, { base, prefix }: UnitFactor, alone: boolean): string {
	const entry = entryOf(base);
	const micro = form === 'tex' ? '\\text{µ}' : 'µ';
	const written = (form === 'text' ? undefined : entry[form]) ?? (form === 'tex' ? undefined : entry.text);
	return (prefix === 'u' ? micro : prefix) + (entry.sign && !alone ? base : (written ?? base));
}

/** As people type it: 'kJ/mol', 'J/(mol K)', 'K^-1', 'm^3', '1' for a number. `parseUnit` reads it back. */
export function unitText(unit: Unit): string {
	const write = (factor: UnitFactor, exponent: number) =>
		symbolIn('text', factor, isSign(unit)) + (exponent === 1 ? '' : `^${exponent}`);
	const above = unit.factors.filter((factor) => factor.exponent > 0);
	const below = unit.factors.filter((factor) => factor.exponent < 0);
	if (above.length === 0) return below.map((factor) => write(factor, factor.exponent)).join(' ') || '1';
	const numerator = above.map((factor) => write(factor, factor.exponent)).join(' ');
	if (below.length === 0) return numerator;
	const denominator = below.map((factor) => write(factor, -factor.exponent));
	return `${numerator}/${denominator.length === 1 ? denominator.join('') : `(${denominator.join(' ')})`}`;
}

/** KaTeX source with negative exponents: '\\mathrm{kJ\\,mol^{-1}}'; empty for a number. */
export function unitTex(unit: Unit): string {
	if (unit.factors.length === 0) return '';
	const parts = unit.factors.map((factor) => {
		const symbol = symbolIn('tex', factor, isSign(unit));
		if (factor.exponent === 1) return symbol;
		// a symbol with a subscript of its own takes its exponent outside of it
		return `${symbol.includes('_') ? `{${symbol}}` : symbol}^{${factor.exponent}}`;
	});
	return `\\mathrm{${parts.join('\\,')}}`;
}

/** Markup for pages, exponents as `<sup>`, thin spaces between factors; empty for a number. */
export function unitHtml(unit: Unit): string {
	return unit.factors
		.map((factor) => {
			// markup of the table itself stands as it is; everything else is text
			const symbol = entryOf(factor.base).html
				? symbolIn('html', factor, isSign(unit))
				: escapeHtml(symbolIn('html', factor, isSign(unit)));
			if (factor.exponent === 1) return symbol;
			return `${symbol}<sup>${String(factor.exponent).replace('-', minus)}</sup>`;
		})
		.join(thinSpace);
}

/** As it is read aloud: 'kilojoules per mole'; `one` asks for the singular. */
export function unitSpeech(unit: Unit, one = false): string {
	const above = unit.factors.filter((factor) => factor.exponent > 0);
	const below = unit.factors.filter((factor) => factor.exponent < 0);
	const say = (factor: UnitFactor, exponent: number, singular: boolean) => {
		const [single, several] = entryOf(factor.base).speech;
		const name = (prefixFactors[factor.prefix]?.[1] ?? '') + (singular ? single : several);
		const dimension = exponent === 1 ? '' : exponent === 2 ? 'square ' : exponent === 3 ? 'cubic ' : '';
		return dimension === '' && exponent !== 1 ? `${name} to the power ${exponent}` : dimension + name;
	};
	const words = above.map((factor, i) => say(factor, factor.exponent, one || i < above.length - 1)).join(' ');
	const under = below.map((factor) => say(factor, -factor.exponent, true)).join(' ');
	return [words, under === '' ? '' : `per ${under}`].filter((part) => part !== '').join(' ');
}

export function escapeHtml(text: string): string {
	return text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');
}
