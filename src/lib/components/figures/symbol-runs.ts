/** A stretch of a quantity's symbol in one style. */
export interface SymbolRun {
	text: string;
	/** quantities are italic, everything else upright (ISO 80000-1, 7.1) */
	italic: boolean;
	shift: 'sub' | 'sup' | null;
	/** an overline: the mean of a quantity */
	over?: boolean;
}

const letters: Record<string, string> = {
	alpha: 'α',
	beta: 'β',
	gamma: 'γ',
	delta: 'δ',
	epsilon: 'ε',
	varepsilon: 'ε',
	zeta: 'ζ',
	eta: 'η',
	theta: 'θ',
	vartheta: 'ϑ',
	kappa: 'κ',
	lambda: 'λ',
	mu: 'μ',
	nu: 'ν',
	xi: 'ξ',
	pi: 'π',
	rho: 'ρ',
	sigma: 'σ',
	tau: 'τ',
	phi: 'φ',
	varphi: 'φ',
	chi: 'χ',
	psi: 'ψ',
	omega: 'ω'
};
const uprights: Record<string, string> = {
	Delta: 'Δ',
	Sigma: 'Σ',
	Omega: 'Ω',
	Gamma: 'Γ',
	Phi: 'Φ',
	Psi: 'Ψ',
	partial: '∂',
	cdot: '·',
	times: '×',
	circ: '°',
	degree: '°',
	pm: '±',
	infty: '∞',
	prime: '′',
	',': '\u2009',
	';': '\u2009',
	':': '\u2009',
	' ': ' ',
	'!': '',
	left: '',
	right: '',
	displaystyle: '',
	'%': '%'
};
const functions = new Set(['ln', 'log', 'lg', 'exp', 'sin', 'cos', 'tan']);
const uprightGroups = new Set(['mathrm', 'text', 'operatorname', 'mathsf', 'textrm']);

/**
 * A symbol's TeX as runs that HTML and SVG can set without a formula engine: letters, Greek, groups, one level of
 * subscripts and superscripts, overlines and simple fractions. Unknown commands appear by name, so that nothing vanishes.
 */
export function symbolRuns(tex: string): SymbolRun[] {
	const tokens = tex.match(/\\[A-Za-z]+|\\.|[{}^_~]|\s+|[^\\{}^_~\s]/gu) ?? [];
	const runs: SymbolRun[] = [];
	let place = 0;

	function put(text: string, style: Omit<SymbolRun, 'text'>) {
		if (text === '') return;
		const last = runs.at(-1);
		if (last && last.italic === style.italic && last.shift === style.shift && last.over === style.over) {
			last.text += text;
		} else runs.push({ text, ...style });
	}
	function argument(style: Omit<SymbolRun, 'text'>, upright: boolean) {
		while (/^\s+$/u.test(tokens[place] ?? '')) place++;
		if (tokens[place] === '{') {
			place++;
			sequence(style, upright);
		} else if (place < tokens.length) token(style, upright);
	}
	function sequence(style: Omit<SymbolRun, 'text'>, upright: boolean) {
		while (place < tokens.length && tokens[place] !== '}') token(style, upright);
		place++;
	}
	function command(name: string, style: Omit<SymbolRun, 'text'>, upright: boolean) {
		if (uprightGroups.has(name)) argument({ ...style, italic: false }, true);
		else if (name === 'mathit') argument(style, false);
		else if (name === 'overline' || name === 'bar') argument({ ...style, over: true }, upright);
		else if (name === 'frac') {
			argument(style, upright);
			put('/', { ...style, italic: false });
			argument(style, upright);
		} else if (functions.has(name)) {
			const next = tokens[place];
			put(next === '(' || next === '_' || next === '{' ? name : `${name}\u2009`, { ...style, italic: false });
			if (/^\s+$/u.test(next ?? '')) place++;
		} else if (Object.hasOwn(letters, name)) put(letters[name] ?? '', { ...style, italic: !upright });
		else put(uprights[name] ?? name, { ...style, italic: false });
	}
	function token(style: Omit<SymbolRun, 'text'>, upright: boolean) {
		const text = tokens[place++] ?? '';
		if (text === '{') sequence(style, upright);
		else if (text === '}') return;
		else if (text === '_') argument({ ...style, shift: style.shift ?? 'sub' }, upright);
		else if (text === '^') argument({ ...style, shift: style.shift ?? 'sup' }, upright);
		else if (text === '~') put('\u2009', { ...style, italic: false });
		else if (text.startsWith('\\')) command(text.slice(1), style, upright);
		else if (/^\s+$/u.test(text)) {
			// TeX drops spaces between letters and keeps those of \text.
			if (upright) put(' ', { ...style, italic: false });
		} else if (text === '-') put('\u2212', { ...style, italic: false });
		else put(text, { ...style, italic: !upright && /\p{L}/u.test(text) });
	}
	while (place < tokens.length) {
		if (tokens[place] === '}') place++;
		else token({ italic: false, shift: null }, false);
	}
	return runs;
}

/** A unit in plain text ("kJ/mol", "K^-1") as upright runs, exponents raised. */
export function unitRuns(unit: string): SymbolRun[] {
	if (unit === '' || unit === '1') return [];
	const reciprocal = /^1\/([^\d/\s()]+)$/u.exec(unit);
	if (reciprocal?.[1] !== undefined) return unitRuns(`${reciprocal[1]}^-1`);
	const upright = (text: string, shift: SymbolRun['shift']): SymbolRun => ({ text, italic: false, shift });
	return [...unit.matchAll(/\^?(?<power>[-\u2212]?\d+)|(?<name>[^\d^\-\u2212]+)/gu)].map(({ groups }) =>
		groups?.['power'] === undefined
			? upright((groups?.['name'] ?? '').replace(/[*· ]/gu, '\u2009'), null)
			: upright(groups['power'].replace('-', '\u2212'), 'sup')
	);
}

/** What stands at an axis or over a column: the number there is the quantity divided by its unit. */
export function axisRuns(symbol: string, unit: string, exponent = 0): SymbolRun[] {
	const quantity = symbolRuns(symbol);
	const units = unitRuns(unit);
	if (exponent === 0) {
		if (units.length === 0) return quantity;
		const compound = units.some(({ text }) => text.includes('/') || text.includes('\u2009'));
		const slash: SymbolRun = {
			text: compound ? '\u2009/\u2009(' : '\u2009/\u2009',
			italic: false,
			shift: null
		};
		const end: SymbolRun[] = compound ? [{ text: ')', italic: false, shift: null }] : [];
		return [...quantity, slash, ...units, ...end];
	}
	return [
		...quantity,
		{ text: '\u2009/\u2009(10', italic: false, shift: null },
		{ text: String(exponent).replace('-', '\u2212'), italic: false, shift: 'sup' },
		...(units.length > 0 ? [{ text: '\u2009', italic: false, shift: null } as const, ...units] : []),
		{ text: ')', italic: false, shift: null }
	];
}

/** As one plain string, for descriptions and titles. */
export function runsText(runs: readonly SymbolRun[]): string {
	return runs
		.map(({ text, shift }) => (shift === 'sup' ? `^${text}` : shift === 'sub' ? `_${text}` : text))
		.join('');
}
