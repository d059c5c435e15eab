import { exactly, parseUnit } from '$lib/quantities';
import { dual, type Dual, type Model } from '$lib/regression';
import { compareNumbers } from './formula';
import { isLeaf, leafKey, leavesOf, type Leaf } from './formula-tree';
import type { FitDefinition, Formula } from './types';

/** The leaves of a curve's formula that are not its parameters, each once: the model's inputs. */
export function inputLeaves(fit: FitDefinition): Leaf[] {
	return fit.curve ? leavesOf(fit.curve.formula).filter((leaf) => parameterIndex(fit, leaf) < 0) : [];
}

function parameterIndex(fit: FitDefinition, leaf: Leaf): number {
	const name =
		leaf.op === 'name' ? leaf.name : leaf.op === 'column' && leaf.table === fit.per ? leaf.column : null;
	return name === null ? -1 : fit.parameters.findIndex((parameter) => parameter.name === name);
}

/** A curve's formula over dual numbers, all in SI: exact derivatives towards parameters and inputs. */
export function modelOf(fit: FitDefinition): Model {
	const formula = fit.curve?.formula;
	if (!formula) throw new Error(`${fit.name} has no formula`);
	const inputs = inputLeaves(fit);
	const places = new Map(inputs.map((leaf, i) => [leafKey(leaf), i]));
	const lookUps = new Map<Formula, { parameter: boolean; index: number }>();
	const find = (leaf: Leaf): { parameter: boolean; index: number } => {
		const known = lookUps.get(leaf);
		if (known) return known;
		const parameter = parameterIndex(fit, leaf);
		const found =
			parameter >= 0
				? { parameter: true, index: parameter }
				: { parameter: false, index: places.get(leafKey(leaf)) ?? -1 };
		lookUps.set(leaf, found);
		return found;
	};
	return (parameters, values) =>
		compute(formula, (leaf) => {
			const { parameter, index } = find(leaf);
			return (parameter ? parameters : values)[index] ?? dual.constant(NaN);
		});
}

type Look = (leaf: Leaf) => Dual;

const functions: Readonly<Record<string, (a: Dual) => Dual>> = {
	ln: dual.ln,
	log10: dual.log10,
	exp: dual.exp,
	sqrt: dual.sqrt,
	abs: dual.abs,
	sin: dual.sin,
	cos: dual.cos,
	tan: dual.tan,
	asin: dual.asin,
	acos: dual.acos,
	atan: dual.atan,
	kelvin: (a) => a
};

function compute(formula: Formula, look: Look): Dual {
	if (isLeaf(formula)) return look(formula);
	switch (formula.op) {
		case 'number':
			return dual.constant(formula.value);
		case 'unit':
			return dual.constant(exactly(1, { ...parseUnit(formula.unit), offset: 0 }).value);
		case 'negate':
			return dual.negate(compute(formula.of, look));
		case 'add':
			return dual.add(compute(formula.left, look), compute(formula.right, look));
		case 'subtract':
			return dual.subtract(compute(formula.left, look), compute(formula.right, look));
		case 'multiply':
			return dual.multiply(compute(formula.left, look), compute(formula.right, look));
		case 'divide':
			return dual.divide(compute(formula.left, look), compute(formula.right, look));
		case 'power':
			return dual.power(compute(formula.left, look), compute(formula.right, look));
		case 'if':
			return compute(holds(formula.condition, look) ? formula.yes : formula.no, look);
		case 'call':
			return call(formula, look);
		default:
			return dual.constant(NaN);
	}
}

function call(formula: Extract<Formula, { op: 'call' }>, look: Look): Dual {
	const values = formula.arguments.map((argument) => compute(argument, look));
	const [first] = values;
	const single = Object.hasOwn(functions, formula.function) ? functions[formula.function] : undefined;
	if (!first) return dual.constant(NaN);
	if (single) return single(first);
	if (formula.function === 'min')
		return values.reduce((least, each) => (each.value < least.value ? each : least));
	if (formula.function === 'max')
		return values.reduce((most, each) => (each.value > most.value ? each : most));
	return dual.constant(NaN);
}

/** Conditions compare values; texts do not occur in a curve. */
function holds(formula: Formula, look: Look): boolean {
	switch (formula.op) {
		case 'not':
			return !holds(formula.of, look);
		case 'and':
			return holds(formula.left, look) && holds(formula.right, look);
		case 'or':
			return holds(formula.left, look) || holds(formula.right, look);
		case 'compare':
			return compareNumbers(
				formula.how,
				compute(formula.left, look).value,
				compute(formula.right, look).value
			);
		default:
			return false;
	}
}
