import {
	add,
	divide,
	exactly,
	multiply,
	negate,
	parseUnit,
	plainNumber,
	power,
	QuantityProblem,
	sameDimension,
	subtract,
	type Quantity
} from '$lib/quantities';
import { childrenOf, isLeaf, type Leaf } from './formula-tree';
import { valueFunctions } from './functions';
import type { Comparing, Formula } from './types';

/** Where a formula's leaves come from. All three throw where there is no value. */
export interface Surroundings {
	quantity(leaf: Leaf): Quantity;
	/** the text of a text or choice column, or of a parameter that is a choice */
	text(leaf: Extract<Formula, { op: 'cell' | 'choice' }>): string;
	/** whether there is a value */
	given(leaf: Leaf): boolean;
	/** called once for each node: the budget of one evaluation */
	step(): void;
}

/**
 * The value of a formula. Nothing but the listed operations and functions is reachable, and the tree is finite, so
 * evaluation always ends.
 * @throws QuantityProblem where dimensions or domains do not fit
 */
export function evaluateFormula(formula: Formula, from: Surroundings): Quantity {
	from.step();
	switch (formula.op) {
		case 'number':
			return plainNumber(formula.value);
		case 'unit':
			return oneOf(formula.unit);
		case 'name':
		case 'column':
		case 'over':
			return from.quantity(formula);
		case 'negate':
			return negate(evaluateFormula(formula.of, from));
		case 'add':
			return add(evaluateFormula(formula.left, from), evaluateFormula(formula.right, from));
		case 'subtract':
			return subtract(evaluateFormula(formula.left, from), evaluateFormula(formula.right, from));
		case 'multiply':
			return multiply(evaluateFormula(formula.left, from), evaluateFormula(formula.right, from));
		case 'divide':
			return divide(evaluateFormula(formula.left, from), evaluateFormula(formula.right, from));
		case 'power':
			return power(evaluateFormula(formula.left, from), evaluateFormula(formula.right, from));
		case 'if':
			return evaluateFormula(holds(formula.condition, from) ? formula.yes : formula.no, from);
		case 'call': {
			const known = Object.hasOwn(valueFunctions, formula.function)
				? valueFunctions[formula.function]
				: undefined;
			if (!known) throw new QuantityProblem('domain', `There is no function ${formula.function}.`);
			return known.of(formula.arguments.map((part) => evaluateFormula(part, from)));
		}
		default:
			throw new QuantityProblem('domain', 'A condition or a text stands where a value is wanted.');
	}
}

const ones = new Map<string, Quantity>();

/** One of a unit, as it stands in a formula. */
function oneOf(unit: string): Quantity {
	let one = ones.get(unit);
	if (!one) ones.set(unit, (one = { ...exactly(1, parseUnit(unit)), point: false }));
	return one;
}

/** Whether a condition holds. */
export function holds(formula: Formula, from: Surroundings): boolean {
	from.step();
	switch (formula.op) {
		case 'given':
			return isLeaf(formula.of) && from.given(formula.of);
		case 'not':
			return !holds(formula.of, from);
		case 'and':
			return holds(formula.left, from) && holds(formula.right, from);
		case 'or':
			return holds(formula.left, from) || holds(formula.right, from);
		case 'compare': {
			const texts = [textOf(formula.left, from), textOf(formula.right, from)] as const;
			if (texts[0] !== null && texts[1] !== null) return compareTexts(formula.how, texts[0], texts[1]);
			const left = evaluateFormula(formula.left, from);
			const right = evaluateFormula(formula.right, from);
			if (!sameDimension(left.dimension, right.dimension)) {
				throw new QuantityProblem('dimension', 'The two sides of a comparison are of different kinds.');
			}
			return compareNumbers(formula.how, left.value, right.value);
		}
		default:
			throw new QuantityProblem('domain', 'A condition is wanted, such as t > 5 * min.');
	}
}

function textOf(formula: Formula, from: Surroundings): string | null {
	if (formula.op === 'text') return formula.text;
	return formula.op === 'cell' || formula.op === 'choice' ? from.text(formula) : null;
}

function compareTexts(how: Comparing, left: string, right: string): boolean {
	return how === '==' ? left === right : left !== right;
}

export function compareNumbers(how: Comparing, left: number, right: number): boolean {
	switch (how) {
		case '==':
			return left === right;
		case '!=':
			return left !== right;
		case '<':
			return left < right;
		case '<=':
			return left <= right;
		case '>':
			return left > right;
		case '>=':
			return left >= right;
	}
}

/** Whether a formula is a condition rather than a value. */
export function isCondition(formula: Formula): boolean {
	return ['compare', 'and', 'or', 'not', 'given'].includes(formula.op);
}

/** Nodes of a formula. */
export function sizeOf(formula: Formula): number {
	return childrenOf(formula).reduce((sum, child) => sum + sizeOf(child), 1);
}
