import { prefixFactors } from './unit-table';
import { entryOf, type Unit, type UnitFactor } from './units';

const thinSpace = '\u2009';
const minus = '\u2212';

function symbolText({ base, prefix }: UnitFactor): string {
	const prefixText = prefix === 'u' ? 'µ' : prefix;
	return prefixText + (entryOf(base).text ?? base);
}

/** As people type it: 'kJ/mol', 'J/(mol K)', 'K^-1', 'm^3', '1' for a number. `parseUnit` reads it back. */
export function unitText(unit: Unit): string {
	const write = (factor: UnitFactor, exponent: number) =>
		symbolText(factor) + (exponent === 1 ? '' : `^${exponent}`);
	const above = unit.factors.filter((factor) => factor.exponent > 0);
	const below = unit.factors.filter((factor) => factor.exponent < 0);
	if (above.length === 0) return below.map((factor) => write(factor, factor.exponent)).join(' ') || '1';
	const numerator = above.map((factor) => write(factor, factor.exponent)).join(' ');
	if (below.length === 0) return numerator;
	const denominator = below.map((factor) => write(factor, -factor.exponent));
	return `${numerator}/${denominator.length === 1 ? denominator.join('') : `(${denominator.join(' ')})`}`;
}

/** KaTeX source with negative exponents: '\mathrm{kJ\,mol^{-1}}'; empty for a number. */
export function unitTex(unit: Unit): string {
	if (unit.factors.length === 0) return '';
	const parts = unit.factors.map((factor) => {
		const prefix = factor.prefix === 'u' ? '\\text{µ}' : factor.prefix;
		const symbol = prefix + (entryOf(factor.base).tex ?? factor.base);
		return factor.exponent === 1 ? symbol : `${symbol}^{${factor.exponent}}`;
	});
	return `\\mathrm{${parts.join('\\,')}}`;
}

/** Markup for pages, exponents as `<sup>`, thin spaces between factors; empty for a number. */
export function unitHtml(unit: Unit): string {
	return unit.factors
		.map((factor) => {
			const symbol = escapeHtml(symbolText(factor));
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
