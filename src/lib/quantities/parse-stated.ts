import { decimal, longestText, numberPattern, readNumber, tidy } from './number-text';
import { QuantityProblem } from './problems';
import { noClause, ofKind, readClause, splitClause, standard, type StatedUncertainty } from './stated-kind';
import { isGlued } from './unit-text';
import { parseUnit, unitOne, type Unit } from './units';

export interface StatedQuantity {
	value: number;
	decimals: number;
	/** null where none is written; '1' cannot be told from none */
	unit: Unit | null;
	uncertainty: StatedUncertainty | null;
	/** '1,394' may be one thousand three hundred and ninety-four */
	doubt: 'comma-before-three-digits' | null;
}

export type StatedReading =
	| { kind: 'empty' }
	| { kind: 'quantity'; quantity: StatedQuantity }
	| { kind: 'problem'; code: StatedProblemCode; message: string };

export type StatedProblemCode =
	'not-a-number' | 'two-separators' | 'two-readings' | 'too-large' | 'unknown-unit';

/**
 * Reads a quantity with its uncertainty in any of the forms in which they are shown, and in those in which people write
 * them: 1.394(12) × 10^3 J/K; (1.394 ± 0.012) kJ/mol, k = 2.26, ν = 9; 1,394 V ± 0,012 V (standard uncertainty);
 * 41.6 kJ/mol ± 1 %; KaTeX source. Digits in parentheses are always a standard uncertainty; a ± without a word about its
 * kind is 'not-stated', for nobody can know it.
 */
export function parseStated(typed: string): StatedReading {
	const shown = typed.trim();
	const problem = (code: StatedProblemCode, message: string): StatedReading => ({
		kind: 'problem',
		code,
		message
	});
	if (shown === '') return { kind: 'empty' };
	if (shown.length > longestText)
		return problem('not-a-number', 'A text of this length is not one quantity.');
	const text = tidy(shown);
	if (hasTwoSeparators(text)) {
		return problem(
			'two-separators',
			`"${shown}" has a comma and a point. Type it with one decimal sign and no other.`
		);
	}
	const { body, clause } = splitClause(text);
	const number = readNumber(body);
	const kind = clause === null ? noClause : readClause(clause);
	if (!number || !kind) return problem('not-a-number', `"${shown}" is not a quantity.`);
	if (number.loosePower) return problem('two-readings', looseMessage(shown));

	const rest = number.rest.trim();
	const apart = number.spread ? null : splitSpread(rest);
	const units = unitsOf(apart ? [apart.before, apart.after] : [rest]);
	if (typeof units === 'string') return problem('unknown-unit', units);
	const [unit = null, its = null] = units;
	let size = number.spread?.size ?? apart?.size ?? kind.size;
	if (number.spread && isRelative(unit) && number.spread.form === 'plus-minus' && !body.startsWith('(')) {
		return problem(
			'two-readings',
			`"${shown}" can be read in two ways. Write (a ± b) % where both are in per cent.`
		);
	}
	if (apart && size !== null) {
		if (isRelative(its) && !isRelative(unit)) size = (Math.abs(number.value) * size) / 100;
		else if (!sameUnit(unit, its)) {
			return problem(
				'two-readings',
				`"${shown}" gives value and uncertainty different units. Write both in one.`
			);
		}
	}
	if (clause !== null && size === null)
		return problem('not-a-number', `"${shown}" tells of an uncertainty, but not its size.`);
	if (!Number.isFinite(number.value) || !Number.isFinite(size ?? 0)) {
		return problem('too-large', `"${shown}" is larger than any number that can be kept.`);
	}
	const inParentheses = number.spread?.form === 'parentheses';
	if (inParentheses && kind.kind === 'expanded') {
		return problem(
			'two-readings',
			`"${shown}" calls the digits in parentheses expanded; here they are a standard uncertainty. Write a ± b for the expanded one.`
		);
	}
	return {
		kind: 'quantity',
		quantity: {
			value: number.value,
			decimals: number.decimals,
			unit,
			uncertainty: size === null ? null : ofKind(size, inParentheses ? standard : kind),
			doubt: doubtOf(number.digits)
		}
	};
}

export function hasTwoSeparators(text: string): boolean {
	return /\d,\d{3}\.\d|\d\.\d{3},\d/.test(text);
}

export function doubtOf(digits: string): StatedQuantity['doubt'] {
	return /^[+-]?[1-9]\d{0,2},\d{3}$/.test(digits) ? 'comma-before-three-digits' : null;
}

export function looseMessage(shown: string): string {
	return `"${shown}" can be read in two ways. Put value and uncertainty in parentheses before the power of ten.`;
}

const spreadApart = new RegExp(
	String.raw`^(?<before>.*?)\s*(?:±|\+/-|\+-)\s*(?<size>${numberPattern})(?<after>.*)$`,
	'u'
);

/** '1.394 V ± 0.012 V': the unit stands at both. */
function splitSpread(rest: string): { before: string; size: number; after: string } | null {
	const groups = spreadApart.exec(rest)?.groups;
	if (!groups) return null;
	const size = decimal(groups.size ?? '');
	return size < 0 ? null : { before: (groups.before ?? '').trim(), size, after: (groups.after ?? '').trim() };
}

function unitsOf(texts: readonly string[]): (Unit | null)[] | string {
	try {
		return texts.map((text) => {
			if (text === '') return null;
			// '12 1' is two numbers, not twelve of the unit 1
			if (/^\d/.test(text) && !/^1\s*\//.test(text)) {
				throw new QuantityProblem('unknown-unit', `"${text}" is not a unit known here.`);
			}
			return parseUnit(text);
		});
	} catch (cause) {
		if (cause instanceof QuantityProblem) return cause.message;
		throw cause;
	}
}

function isRelative(unit: Unit | null): boolean {
	const [only, ...others] = unit?.factors ?? [];
	return only?.base === '%' && only.exponent === 1 && others.length === 0;
}

/** 25 °C ± 0.2 K: the uncertainty of a temperature is told in kelvins; 25 °C ± 0.2 °C is common and clear. */
function sameUnit(unit: Unit | null, its: Unit | null): boolean {
	if (its === null) return true;
	const of = unit ?? unitOne;
	const same = of.factor === its.factor && of.dimension.every((exponent, i) => exponent === its.dimension[i]);
	return same && (isGlued(of) === isGlued(its) || of === its);
}
