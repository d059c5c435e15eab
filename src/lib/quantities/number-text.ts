/** Numbers as people write them, taken apart. What they mean is said in parse-number and parse-stated. */

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
	'⁻': '-',
	'⁺': '+'
};

/** Nothing that states one quantity is longer; more would only cost time. */
export const longestText = 400;

/** True minus, narrow spaces, raised exponents and KaTeX source, brought to one spelling. */
export function tidy(typed: string): string {
	return fromTex(typed)
		.replace(/[\u2212\uFE63\uFF0D]/gu, '-')
		.replace(/[\u202f\u00a0]/gu, '\u2009')
		.replace(
			/10([⁻⁺]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+)/gu,
			(_, run: string) => '10^' + [...run].map((sign) => superscripts[sign] ?? '').join('')
		)
		.trim();
}

function fromTex(text: string): string {
	if (!text.includes('\\')) return text;
	return text
		.replace(/\\left|\\right/g, '')
		.replace(/\\pm/g, '±')
		.replace(/\\times|\\cdot/g, '×')
		.replace(/\{\}\^\{?\\circ\}?\s*/g, '°')
		.replace(/\\Omega/g, '\u03a9')
		.replace(/\\nu/g, 'ν')
		.replace(/\\infty/g, '∞')
		.replace(/\\%/g, '%')
		.replace(/\\mathrm|\\text|\\mathit/g, '')
		.replace(/\\[,;: ]|~/g, ' ')
		.replace(/H_\{?2\}?O/g, 'H2O')
		.replace(/[{}$]/g, '');
}

/**
 * Digits with a decimal point or comma. Groups of three before it may stand apart by a space or a thin one, those behind
 * it by a thin one only: '1.394 12' may be two numbers.
 */
const digitsOf = String.raw`(?:(?:\d{1,3}(?:[ \u2009]\d{3})+(?!\d)|\d+)(?:[.,](?:\d{3}(?:\u2009\d{3})*\u2009\d{1,3}(?!\d)|\d*))?|[.,]\d+)`;
const letterE = String.raw`[eE](?<E>[+-]?\d+)`;
// '× 103' may be a raised 3 that lost its height in copying: it wants its ^ or its sign
const timesTen = String.raw`\s*[x×·*]\s*10\s*(?:\^\s*|(?=[+-]))(?<T>[+-]?\d+)`;

const named = (pattern: string, name: string) => pattern.replace(/\?<(\w)>/, `?<${name}$1>`);

export const numberPattern = String.raw`[+-]?${digitsOf}(?:[eE][+-]?\d+)?`;
const value = `(?<value>[+-]?${digitsOf})`;
const plusMinus = String.raw`\s*(?:±|\+/-|\+-)\s*`;
const range = `(?<range>${digitsOf})`;

const forms = {
	/** 1.394, 1.394(12), with a power of ten */
	single: new RegExp(
		`^${value}(?:\\((?<inside>\\d+(?:[.,]\\d+)?)\\))?(?:${named(letterE, 'common')}|${named(timesTen, 'common')})?`,
		'u'
	),
	/** (1.394 ± 0.012), with a power of ten outside that belongs to both */
	bracketed: new RegExp(
		`^\\(\\s*${value}(?:${named(letterE, 'own')})?${plusMinus}${range}(?:${named(letterE, 'its')})?\\s*\\)(?:${named(letterE, 'common')}|${named(timesTen, 'common')})?`,
		'u'
	),
	/** 1.394 ± 0.012; a letter E belongs to its own number */
	open: new RegExp(
		`^${value}(?:${named(letterE, 'own')})?${plusMinus}${range}(?:${named(letterE, 'its')})?(?<loose>${timesTen.replace('?<T>', '?:')})?`,
		'u'
	)
} as const;

export interface WrittenNumber {
	/** the value's own digits, sign included, as typed: '1,394' */
	digits: string;
	value: number;
	/** decimals typed */
	decimals: number;
	/** what stands in parentheses, '1.394(12)', or behind a plus-minus; on the value's scale */
	spread: { form: 'parentheses' | 'plus-minus'; size: number } | null;
	/** '1394 ± 1.2 × 10^1': nobody can tell whether the power belongs to both */
	loosePower: boolean;
	/** what follows the number */
	rest: string;
}

/** The number at the beginning of a tidy text; null where there is none. Values may be infinite: the caller looks. */
export function readNumber(text: string): WrittenNumber | null {
	const match = forms.bracketed.exec(text) ?? forms.open.exec(text) ?? forms.single.exec(text);
	if (!match) return null;
	const groups = match.groups ?? {};
	const digits = groups.value ?? '';
	const common = Number(groups.commonE ?? groups.commonT ?? 0);
	const own = common + Number(groups.ownE ?? 0);
	const decimals = decimalsOf(digits);
	return {
		digits,
		value: scaled(digits, own),
		decimals,
		spread: spreadOf(groups, common, own - decimals),
		loosePower: groups.loose !== undefined,
		rest: text.slice(match[0].length)
	};
}

function spreadOf(
	groups: Readonly<Record<string, string | undefined>>,
	common: number,
	lastPlace: number
): WrittenNumber['spread'] {
	const { inside, range: behind } = groups;
	if (inside !== undefined) {
		// digits in parentheses count in the last place; with a decimal sign of their own they stand as they are
		return { form: 'parentheses', size: scaled(inside, /[.,]/.test(inside) ? common : lastPlace) };
	}
	if (behind === undefined) return null;
	return { form: 'plus-minus', size: scaled(behind, common + Number(groups.itsE ?? 0)) };
}

function decimalsOf(digits: string): number {
	return /[.,](.*)$/.exec(digits)?.[1]?.replace(/\D/g, '').length ?? 0;
}

/** Decimal text times a power of ten, rounded once. */
export function scaled(digits: string, power: number): number {
	return Number(`${digits.replace(/[ \u2009]/g, '').replace(',', '.')}e${power}`);
}

/** A number that matches `numberPattern`. */
export function decimal(text: string): number {
	const [digits = '', power = '0'] = text.split(/[eE]/);
	return scaled(digits, Number(power));
}
