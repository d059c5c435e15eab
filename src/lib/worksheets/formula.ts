import {
	absolute,
	add,
	divide,
	exactly,
	exp,
	ln,
	mean,
	multiply,
	negate,
	parseUnit,
	plainNumber,
	power,
	squareRoot,
	subtract,
	sum,
	thermodynamicTemperature,
	type Quantity
} from '$lib/quantities';
import type { Formula } from './types';

/** What a formula may call on single values. `kelvin` turns a Celsius temperature into a thermodynamic one. */
export const valueFunctions: Readonly<Record<string, (a: Quantity) => Quantity>> = {
	ln,
	exp,
	sqrt: squareRoot,
	abs: absolute,
	kelvin: thermodynamicTemperature
};

/** What a formula may call on a whole column: its argument is worked out for every row in use. */
export const columnFunctions: Readonly<Record<string, (items: readonly Quantity[]) => Quantity>> = {
	mean,
	sum
};

/** A leaf of a formula: its value comes from outside. Functions of columns count as leaves. */
export type Leaf = Extract<Formula, { op: 'name' | 'column' | 'call' }>;

/**
 * The value of a formula. `lookUp` gives the leaves' values and throws where there is none; nothing but the
 * functions above is reachable, and the tree is finite, so evaluation always ends.
 * @throws QuantityProblem where dimensions or domains do not fit
 */
export function evaluateFormula(formula: Formula, lookUp: (leaf: Leaf) => Quantity): Quantity {
	const value = (part: Formula) => evaluateFormula(part, lookUp);
	switch (formula.op) {
		case 'number':
			return plainNumber(formula.value);
		case 'unit':
			return { ...exactly(1, parseUnit(formula.unit)), point: false };
		case 'name':
		case 'column':
			return lookUp(formula);
		case 'negate':
			return negate(value(formula.of));
		case 'add':
			return add(value(formula.left), value(formula.right));
		case 'subtract':
			return subtract(value(formula.left), value(formula.right));
		case 'multiply':
			return multiply(value(formula.left), value(formula.right));
		case 'divide':
			return divide(value(formula.left), value(formula.right));
		case 'power':
			return power(value(formula.left), value(formula.right));
		case 'call': {
			const single = Object.hasOwn(valueFunctions, formula.function)
				? valueFunctions[formula.function]
				: undefined;
			const [argument] = formula.arguments;
			if (single && argument) return single(value(argument));
			return lookUp(formula);
		}
	}
}

/** The leaves of a formula in the order in which they stand, each once. */
export function leavesOf(formula: Formula): Leaf[] {
	const found = new Map<string, Leaf>();
	const walk = (part: Formula): void => {
		if (isLeaf(part)) found.set(leafKey(part), part);
		else childrenOf(part).forEach(walk);
	};
	walk(formula);
	return [...found.values()];
}

/** Every leaf, those inside functions of columns too: what the formula depends on. */
export function dependenciesOf(formula: Formula): Leaf[] {
	const found = new Map<string, Leaf>();
	const walk = (part: Formula): void => {
		if (part.op === 'name' || part.op === 'column') found.set(leafKey(part), part);
		childrenOf(part).forEach(walk);
	};
	walk(formula);
	return [...found.values()];
}

export function isLeaf(formula: Formula): formula is Leaf {
	if (formula.op === 'name' || formula.op === 'column') return true;
	return formula.op === 'call' && Object.hasOwn(columnFunctions, formula.function);
}

export function leafKey(leaf: Leaf): string {
	return JSON.stringify(leaf);
}

/** The table whose rows a function of a column runs over. */
export function tableOf(formula: Formula): string | null {
	for (const leaf of dependenciesOf(formula)) if (leaf.op === 'column') return leaf.table;
	return null;
}

function childrenOf(formula: Formula): Formula[] {
	switch (formula.op) {
		case 'negate':
			return [formula.of];
		case 'add':
		case 'subtract':
		case 'multiply':
		case 'divide':
		case 'power':
			return [formula.left, formula.right];
		case 'call':
			return formula.arguments;
		default:
			return [];
	}
}
