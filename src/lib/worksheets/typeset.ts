import { parseUnit, unitTex } from '$lib/quantities';
import { isLeaf, type Leaf } from './formula';
import type { Formula } from './types';

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
		default:
			return { tex: writeCall(formula, types), binds: strength.atom };
	}
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
		default:
			return `\\${formula.function}\\left(${inside}\\right)`;
	}
}
