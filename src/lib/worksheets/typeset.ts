import { parseUnit, unitTex } from '$lib/quantities';
import { isLeaf, type Leaf } from './formula-tree';
import type { Comparing, Formula } from './types';

/** How leaves are written: as symbols, or as numbers with their units. */
export interface LeafTypes {
	leaf: (leaf: Leaf) => string;
	/** the number alone on the leaf's own scale, for kelvin(t): '82.93' */
	celsius: (formula: Formula) => string;
	/** a quantity over a unit, where it is written otherwise than as it stands: null leaves it so */
	overUnit: (left: Formula, unit: string) => string | null;
	/** between factors: a thin space for symbols, a cross for numbers */
	times: string;
}

const comparing: Readonly<Record<Comparing, string>> = {
	'==': '=',
	'!=': '\\neq',
	'<': '<',
	'<=': '\\le',
	'>': '>',
	'>=': '\\ge'
};

/** Binding strength, so that parentheses stand only where they are needed. */
const strength = { sum: 1, sign: 2, product: 3, power: 4, atom: 5 } as const;

/** A formula as KaTeX source. */
export function typeset(formula: Formula, types: LeafTypes): string {
	return write(formula, types).tex;
}

interface Written {
	tex: string;
	binds: number;
}

function write(formula: Formula, types: LeafTypes): Written {
	const inner = (part: Formula, least: number) => {
		const { tex, binds } = write(part, types);
		return binds < least ? `\\left(${tex}\\right)` : tex;
	};
	if (isLeaf(formula)) {
		const tex = types.leaf(formula);
		return { tex, binds: tex.startsWith('-') ? strength.sign : strength.atom };
	}
	switch (formula.op) {
		case 'number':
			return { tex: formula.text, binds: strength.atom };
		case 'unit':
			return { tex: unitTex(parseUnit(formula.unit)) || '1', binds: strength.atom };
		case 'negate':
			return { tex: `-${inner(formula.of, strength.product)}`, binds: strength.sign };
		case 'add':
			return {
				tex: `${inner(formula.left, strength.sum)} + ${inner(formula.right, strength.product)}`,
				binds: strength.sum
			};
		case 'subtract':
			return {
				tex: `${inner(formula.left, strength.sum)} - ${inner(formula.right, strength.product)}`,
				binds: strength.sum
			};
		case 'multiply': {
			const between = formula.right.op === 'unit' ? '\\,' : types.times;
			const left = write(formula.left, types);
			// a minus in front needs no parentheses: it is the sign of the whole product
			const signed = left.binds === strength.sign;
			const first = signed ? left.tex : inner(formula.left, strength.product);
			const tex = `${first}${between}${inner(formula.right, strength.product)}`;
			return { tex, binds: signed ? strength.sign : strength.product };
		}
		case 'divide':
			// a quantity over a unit stands on one line, as in ln(p/Pa); everything else as a fraction
			if (formula.right.op === 'unit') {
				const special = types.overUnit(formula.left, formula.right.unit);
				if (special !== null) return { tex: special, binds: strength.product };
				return {
					tex: `${inner(formula.left, strength.atom)}/${inner(formula.right, strength.atom)}`,
					binds: strength.product
				};
			}
			return {
				tex: `\\frac{${write(formula.left, types).tex}}{${write(formula.right, types).tex}}`,
				binds: strength.power
			};
		case 'power':
			return {
				tex: `${inner(formula.left, strength.atom)}^{${write(formula.right, types).tex}}`,
				binds: strength.power
			};
		case 'call':
			return { tex: writeCall(formula, types), binds: strength.atom };
		case 'if': {
			const [yes, no] = [write(formula.yes, types).tex, write(formula.no, types).tex];
			const condition = write(formula.condition, types).tex;
			const tex = `\\begin{cases} ${yes} & ${condition} \\\\ ${no} & \\text{otherwise} \\end{cases}`;
			return { tex, binds: strength.atom };
		}
		default:
			return { tex: writeCondition(formula, types), binds: strength.atom };
	}
}

/** Conditions and texts, as they stand beside a value that depends on them. */
function writeCondition(formula: Formula, types: LeafTypes): string {
	const tex = (part: Formula) => write(part, types).tex;
	switch (formula.op) {
		case 'compare':
			return `${tex(formula.left)} ${comparing[formula.how]} ${tex(formula.right)}`;
		case 'and':
		case 'or':
			return `${tex(formula.left)}\\ \\text{${formula.op}}\\ ${tex(formula.right)}`;
		case 'not':
			return `\\text{not}\\ ${tex(formula.of)}`;
		case 'given':
			return `${tex(formula.of)}\\ \\text{given}`;
		case 'text':
			return `\\text{${plainText(formula.text)}}`;
		case 'cell':
			return `\\text{${plainText(formula.column)}}`;
		case 'choice':
			return `\\text{${plainText(formula.name)}}`;
		default:
			return '';
	}
}

function plainText(text: string): string {
	return text.replace(/[\\{}$&#^_%~]/g, ' ');
}

function writeCall(formula: Extract<Formula, { op: 'call' }>, types: LeafTypes): string {
	const [argument] = formula.arguments;
	if (!argument) return formula.function;
	const inside = write(argument, types).tex;
	switch (formula.function) {
		case 'sqrt':
			return `\\sqrt{${inside}}`;
		case 'abs':
			return `\\left|${inside}\\right|`;
		case 'exp':
			return `\\mathrm{e}^{${inside}}`;
		case 'kelvin':
			return `\\left(${types.celsius(argument)} + 273.15\\right)\\,\\mathrm{K}`;
		case 'ln':
		case 'sin':
		case 'cos':
		case 'tan':
			return `\\${formula.function}\\left(${inside}\\right)`;
		case 'log10':
			return `\\log_{10}\\left(${inside}\\right)`;
		case 'asin':
		case 'acos':
		case 'atan':
			return `\\arc${formula.function.slice(1)}\\left(${inside}\\right)`;
		case 'u':
			return `u\\left(${inside}\\right)`;
		default: {
			const all = formula.arguments.map((each) => write(each, types).tex).join(',\\ ');
			return `\\${formula.function}\\left(${all}\\right)`;
		}
	}
}
