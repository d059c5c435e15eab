import type { Formula } from './types';

/** A leaf of a formula: its value comes from outside. Functions of columns count as leaves. */
export type Leaf = Extract<Formula, { op: 'name' | 'column' | 'over' }>;

export function isLeaf(formula: Formula): formula is Leaf {
	return formula.op === 'name' || formula.op === 'column' || formula.op === 'over';
}

/** Parts of a formula, those inside functions of columns too. */
export function childrenOf(formula: Formula): Formula[] {
	switch (formula.op) {
		case 'negate':
		case 'not':
		case 'given':
			return [formula.of];
		case 'add':
		case 'subtract':
		case 'multiply':
		case 'divide':
		case 'power':
		case 'and':
		case 'or':
		case 'compare':
			return [formula.left, formula.right];
		case 'if':
			return [formula.condition, formula.yes, formula.no];
		case 'call':
			return formula.arguments;
		case 'over':
			return formula.where ? [...formula.arguments, formula.where] : formula.arguments;
		default:
			return [];
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

/** Every node, those inside functions of columns too. */
export function* nodesOf(formula: Formula): Generator<Formula> {
	yield formula;
	for (const child of childrenOf(formula)) yield* nodesOf(child);
}

export function leafKey(leaf: Leaf): string {
	return JSON.stringify(leaf);
}
