// A small scanner of units as people type them: enough to know that two units are the same up to a power of ten.
// It converts nothing else; torr and Pa, for example, stay different.

/** 'J mol-1' and the power of ten of its prefixes: kJ/mol is { key: 'J mol-1', power: 3 }. */
export interface UnitForm {
	key: string;
	power: number;
}

const prefixable = new Set([
	'J',
	'K',
	'mol',
	'Pa',
	'bar',
	'm',
	'g',
	's',
	'L',
	'V',
	'A',
	'C',
	'W',
	'N',
	'Hz',
	'M',
	'eV',
	'cal',
	'Ω'
]);
const fixed = new Set(['°C', '%', 'torr', 'mmHg', 'atm', 'min', 'h', 'Å']);
const synonyms: Record<string, string> = {
	l: 'L',
	Torr: 'torr',
	'℃': '°C',
	ohm: 'Ω',
	ml: 'mL',
	dl: 'dL',
	μl: 'μL',
	hr: 'h'
};
const prefixes: Record<string, number> = {
	p: -12,
	n: -9,
	μ: -6,
	m: -3,
	c: -2,
	d: -1,
	h: 2,
	k: 3,
	M: 6,
	G: 9
};
const superscripts = '⁰¹²³⁴⁵⁶⁷⁸⁹';

const atom = /[A-Za-zµμΩ°Å℃%]+/y;
const exponent = /\^?\{?([-−⁻+⁺]?)([1-9]|[¹²³⁴⁵⁶⁷⁸⁹])\}?(?![\p{L}\d.])/uy;
const product = /\s*[·⋅*]\s*/y;
const quotient = /\s*\/\s*|\s+per\s+/y;
const blank = /\s+/y;

/** The unit that starts at `from`, as much of it as is certainly unit; null when there is none. */
export function scanUnit(text: string, from: number): { form: UnitForm; end: number } | null {
	const exponents = new Map<string, number>();
	let power = 0;
	let end = scanAtom(text, from, 1, add);
	if (end === null) return null;
	for (;;) {
		const here: number = end;
		const times = after(product, text, here);
		const over = after(quotient, text, here);
		const space = after(blank, text, here);
		let reached: number | null = null;
		if (over !== null)
			reached = text[over] === '(' ? scanGroup(text, over + 1, add) : scanAtom(text, over, -1, add);
		else if (times !== null) reached = scanAtom(text, times, 1, add);
		// After a blank only a unit with an exponent is certainly one: "5 K h" might be anything.
		else if (space !== null) reached = scanAtom(text, space, 1, add, true);
		if (reached === null) return { form: formOf(exponents, power), end: here };
		end = reached;
	}

	function add(symbol: string, prefixPower: number, times: number): void {
		exponents.set(symbol, (exponents.get(symbol) ?? 0) + times);
		power += prefixPower * times;
	}
}

/** A whole text as a unit; null when it is not one. '1' is dimensionless: key ''. */
export function parseUnit(text: string): UnitForm | null {
	const trimmed = text.trim();
	if (trimmed === '1') return { key: '', power: 0 };
	const inverse = /^1\s*\/\s*/.exec(trimmed);
	const from = inverse?.[0].length ?? 0;
	const scanned = scanUnit(trimmed, from);
	if (scanned === null || scanned.end !== trimmed.length) return null;
	if (!inverse) return scanned.form;
	const inverted = new Map(
		scanned.form.key.split(' ').map((part): [string, number] => {
			const [, symbol = '', times = '1'] = /^(.*?)(-?\d+)?$/.exec(part) ?? [];
			return [symbol, -Number(times)];
		})
	);
	return formOf(inverted, 0 - scanned.form.power);
}

type Add = (symbol: string, prefixPower: number, times: number) => void;

function scanAtom(text: string, from: number, sign: 1 | -1, add: Add, needsExponent = false): number | null {
	atom.lastIndex = from;
	const word = atom.exec(text)?.[0];
	const unit = word === undefined ? null : unitOf(word);
	if (word === undefined || unit === null) return null;
	const wordEnd = from + word.length;
	exponent.lastIndex = wordEnd;
	const raised = exponent.exec(text);
	if (!raised && (needsExponent || /[\p{L}\d]/u.test(text[wordEnd] ?? ''))) return null;
	const digit = raised?.[2] ?? '1';
	const size = superscripts.includes(digit) ? superscripts.indexOf(digit) : Number(digit);
	const isNegative = raised !== null && /[-−⁻]/.test(raised[1] ?? '');
	add(unit.symbol, unit.power, sign * (isNegative ? -size : size));
	return wordEnd + (raised?.[0].length ?? 0);
}

/** '(mol K)' after a stroke. */
function scanGroup(text: string, from: number, add: Add): number | null {
	const close = text.indexOf(')', from);
	if (close === -1 || close - from > 30) return null;
	const parts = text
		.slice(from, close)
		.split(/[\s·⋅*]+/)
		.filter((part) => part !== '');
	const found: Parameters<Add>[] = [];
	for (const part of parts) {
		if (scanAtom(part, 0, -1, (...unit) => found.push(unit)) !== part.length) return null;
	}
	if (found.length === 0) return null;
	for (const unit of found) add(...unit);
	return close + 1;
}

function unitOf(word: string): { symbol: string; power: number } | null {
	const plain = word.replaceAll('µ', 'μ');
	const name = (Object.hasOwn(synonyms, plain) ? synonyms[plain] : undefined) ?? plain;
	if (fixed.has(name) || prefixable.has(name)) return { symbol: name, power: 0 };
	const prefix = name[0] ?? '';
	const rest = name.slice(1);
	const power = Object.hasOwn(prefixes, prefix) ? prefixes[prefix] : undefined;
	return power !== undefined && prefixable.has(rest) ? { symbol: rest, power } : null;
}

function formOf(exponents: Map<string, number>, power: number): UnitForm {
	const parts = [...exponents]
		.filter(([, times]) => times !== 0)
		.sort(([a], [b]) => (a < b ? -1 : 1))
		.map(([symbol, times]) => (times === 1 ? symbol : `${symbol}${times}`));
	return { key: parts.join(' '), power };
}

function after(pattern: RegExp, text: string, from: number): number | null {
	pattern.lastIndex = from;
	return pattern.test(text) ? pattern.lastIndex : null;
}
