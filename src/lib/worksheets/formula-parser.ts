import { parse, type MathNode } from 'mathjs/number';
import { isUnitSymbol } from '$lib/quantities';
import { isCondition, sizeOf } from './formula';
import { columnFunctions, valueFunctions } from './functions';
import type { Comparing, Formula } from './types';

/** A formula that cannot be taken: what about it, in words for its author. */
export class FormulaProblem extends Error {
	override readonly name = 'FormulaProblem';
}

export interface ScopeTable {
	/** the tables that its rows belong to, nearest first */
	ancestors: readonly string[];
	columns: ReadonlyMap<string, 'number' | 'text'>;
}

/** The names that a formula may use. */
export interface FormulaScope {
	/** constants, parameters, results, fitted parameters */
	names: ReadonlySet<string>;
	/** parameters that are choices */
	choices: ReadonlySet<string>;
	tables: ReadonlyMap<string, ScopeTable>;
	/** the table whose rows the formula is for; null for a single result */
	table: string | null;
}

/** Longest text and largest tree of a formula: far beyond any in use, and small enough for every page. */
const longest = 2_000;
const largest = 500;
/** Brackets within brackets. What a computer can follow beyond that depends on the computer. */
const deepest = 100;

const operators = {
	add: 'add',
	subtract: 'subtract',
	multiply: 'multiply',
	divide: 'divide',
	pow: 'power'
} as const;
const comparisons: Readonly<Record<string, Comparing>> = {
	equal: '==',
	unequal: '!=',
	smaller: '<',
	smallerEq: '<=',
	larger: '>',
	largerEq: '>='
};

/**
 * Ordinary infix mathematics as a JSON tree. The library parses; only numbers, names, units, texts in conditions,
 * + - * / ^, comparisons and the listed functions pass. A name of the worksheet comes before a unit of the same spelling.
 * @throws FormulaProblem
 */
export function parseFormula(text: string, scope: FormulaScope): Formula {
	if (text.length > longest) throw new FormulaProblem(`A formula has at most ${longest} characters.`);
	if (depthOf(text) > deepest)
		throw new FormulaProblem('The formula is nested too deeply. Divide it into steps.');
	let node: MathNode;
	try {
		node = parse(text);
	} catch (cause) {
		// the library's own problems, and a nesting so deep that no computer follows it
		const words = cause instanceof RangeError ? 'it is nested too deeply' : messageOf(cause);
		throw new FormulaProblem(`"${shortened(text)}" is not a formula: ${words}`);
	}
	try {
		const formula = convert(node, { scope, over: null });
		if (sizeOf(formula) <= largest) return formula;
	} catch (cause) {
		// the library follows some nestings that nothing after it does
		if (!(cause instanceof RangeError)) throw cause;
	}
	throw new FormulaProblem('The formula is too long. Divide it into steps.');
}

function depthOf(text: string): number {
	let [depth, most] = [0, 0];
	for (const sign of text) {
		if ('([{'.includes(sign)) most = Math.max(most, (depth += 1));
		else if (')]}'.includes(sign)) depth -= 1;
	}
	return most;
}

/** A formula that has to be a value. */
export function parseValue(text: string, scope: FormulaScope): Formula {
	const formula = parseFormula(text, scope);
	if (isCondition(formula) || isText(formula)) {
		throw new FormulaProblem(`"${shortened(text)}" is a condition or a text. A value is wanted here.`);
	}
	return formula;
}

/** A formula that has to be a condition. */
export function parseCondition(text: string, scope: FormulaScope): Formula {
	const formula = parseFormula(text, scope);
	if (!isCondition(formula)) {
		throw new FormulaProblem(`"${shortened(text)}" is no condition. Compare with ==, <, > and the like.`);
	}
	return formula;
}

function messageOf(cause: unknown): string {
	return cause instanceof Error ? cause.message : String(cause);
}

function shortened(text: string): string {
	return text.length > 80 ? `${text.slice(0, 80)}…` : text;
}

/** mathjs' own types tell nodes apart by `type`; only these fields are read. */
interface PlainNode {
	type: string;
	value?: unknown;
	name?: string;
	fn?: unknown;
	args?: MathNode[];
	content?: MathNode;
}

interface Place {
	scope: FormulaScope;
	/** the table whose rows a function of columns runs over, inside its arguments */
	over: string | null;
}

function convert(node: MathNode, place: Place): Formula {
	const plain = node as unknown as PlainNode;
	const inner = (part: MathNode | undefined) => {
		if (!part) throw new FormulaProblem(`"${shortened(node.toString())}" is incomplete.`);
		return convert(part, place);
	};
	switch (plain.type) {
		case 'ConstantNode':
			if (typeof plain.value === 'string') return { op: 'text', text: plain.value };
			if (typeof plain.value !== 'number' || !Number.isFinite(plain.value)) {
				throw new FormulaProblem(`"${shortened(node.toString())}" is not a number.`);
			}
			return { op: 'number', value: plain.value, text: String(plain.value) };
		case 'ParenthesisNode':
			return inner(plain.content);
		case 'SymbolNode':
			return convertName(plain.name ?? '', place);
		case 'OperatorNode':
			return convertOperator(plain, () => shortened(node.toString()), inner);
		case 'FunctionNode':
			return convertCall(plain, place);
		case 'RelationalNode':
			throw new FormulaProblem('Compare two values at a time and join them with "and".');
		default:
			throw new FormulaProblem(`"${shortened(node.toString())}" is not part of a formula here.`);
	}
}

function convertOperator(
	plain: PlainNode,
	text: () => string,
	inner: (part: MathNode | undefined) => Formula
): Formula {
	const [left, right] = plain.args ?? [];
	const fn = String(plain.fn);
	const value = (part: MathNode | undefined): Formula => wanted(inner(part), false, text);
	if (fn === 'unaryMinus') return { op: 'negate', of: value(left) };
	if (fn === 'unaryPlus') return value(left);
	if (fn === 'not') return { op: 'not', of: wanted(inner(left), true, text) };
	if (fn === 'and' || fn === 'or') {
		return { op: fn, left: wanted(inner(left), true, text), right: wanted(inner(right), true, text) };
	}
	const how = Object.hasOwn(comparisons, fn) ? comparisons[fn] : undefined;
	if (how) return compare(how, inner(left), inner(right), text);
	if (!Object.hasOwn(operators, fn)) {
		throw new FormulaProblem(`"${text()}" uses something other than + - * / ^ and comparisons.`);
	}
	return { op: operators[fn as keyof typeof operators], left: value(left), right: value(right) };
}

function isText(formula: Formula): boolean {
	return formula.op === 'text' || formula.op === 'cell' || formula.op === 'choice';
}

function compare(how: Comparing, left: Formula, right: Formula, text: () => string): Formula {
	if (isText(left) !== isText(right)) throw new FormulaProblem(`"${text()}" compares a text with a number.`);
	if (isText(left) && how !== '==' && how !== '!=') {
		throw new FormulaProblem(`"${text()}": texts are equal (==) or not (!=).`);
	}
	if (isCondition(left) || isCondition(right)) throw new FormulaProblem(`"${text()}" compares conditions.`);
	return { op: 'compare', how, left, right };
}

function wanted(formula: Formula, condition: boolean, text: () => string): Formula {
	if (isText(formula)) throw new FormulaProblem(`"${text()}": a text can only be compared.`);
	if (isCondition(formula) === condition) return formula;
	throw new FormulaProblem(
		condition ? `"${text()}" joins conditions only.` : `"${text()}" computes with a condition.`
	);
}

function convertName(name: string, { scope, over }: Place): Formula {
	const from = over ?? scope.table;
	for (const table of from === null ? [] : [from, ...(scope.tables.get(from)?.ancestors ?? [])]) {
		const kind = scope.tables.get(table)?.columns.get(name);
		if (kind) return { op: kind === 'number' ? 'column' : 'cell', table, column: name };
	}
	if (scope.names.has(name)) return { op: 'name', name };
	if (scope.choices.has(name)) return { op: 'choice', name };
	if (tableOfColumn(name, scope) !== null) {
		throw new FormulaProblem(`"${name}" is a whole column here. Put it into mean(${name}), say.`);
	}
	if (isUnitSymbol(name)) return { op: 'unit', unit: name };
	throw new FormulaProblem(`"${name}" is neither a name of this experiment nor a unit.`);
}

function tableOfColumn(name: string, scope: FormulaScope): string | null {
	for (const [table, { columns }] of scope.tables) if (columns.get(name) === 'number') return table;
	return null;
}

function convertCall(node: PlainNode, place: Place): Formula {
	const name = node.name ?? (node.fn as { name?: string } | undefined)?.name ?? '';
	const args = node.args ?? [];
	const value = (part: MathNode) => wanted(convert(part, place), false, () => name);
	if (name === 'if') return convertIf(args, place);
	if (name === 'given') return convertGiven(args, place);
	const ofColumns = Object.hasOwn(columnFunctions, name) ? columnFunctions[name] : undefined;
	const ofValues = Object.hasOwn(valueFunctions, name) ? valueFunctions[name] : undefined;
	if (ofValues && (!ofColumns || (args.length > 1 && !endsInCondition(args)))) {
		if (args.length < ofValues.least || args.length > ofValues.most) {
			const count =
				ofValues.least === ofValues.most ? 'one value' : `${ofValues.least} to ${ofValues.most} values`;
			throw new FormulaProblem(`${name} takes ${count}.`);
		}
		return { op: 'call', function: name, arguments: args.map(value) };
	}
	if (!ofColumns) {
		const known = [...Object.keys(valueFunctions), ...Object.keys(columnFunctions), 'if'].join(', ');
		throw new FormulaProblem(
			`"${shortened(name)}" is not a function here. The functions are ${known}; for a product write ${shortened(name)} * (...).`
		);
	}
	if (place.over !== null) throw new FormulaProblem(`${name} stands inside another function of columns.`);
	const { columns, places } = ofColumns;
	if (args.length !== columns + places && args.length !== columns + places + 1) {
		throw new FormulaProblem(`${name} takes ${columns + places} arguments, and a condition where wanted.`);
	}
	const table = tableRunOver(name, args.slice(0, columns), place.scope);
	const inside: Place = { ...place, over: table };
	const last = args[columns + places];
	return {
		op: 'over',
		function: name,
		table,
		arguments: [
			...args.slice(0, columns).map((part) => wanted(convert(part, inside), false, () => name)),
			...args.slice(columns, columns + places).map(value)
		],
		where: last ? wanted(convert(last, inside), true, () => name) : null
	};
}

function convertIf(args: MathNode[], place: Place): Formula {
	const [condition, yes, no] = args.map((part) => convert(part, place));
	if (!condition || !yes || !no || args.length !== 3) {
		throw new FormulaProblem('if takes a condition and two values.');
	}
	return {
		op: 'if',
		condition: wanted(condition, true, () => 'if'),
		yes: wanted(yes, false, () => 'if'),
		no: wanted(no, false, () => 'if')
	};
}

function convertGiven(args: MathNode[], place: Place): Formula {
	const [of] = args.map((part) => convert(part, place));
	if (args.length !== 1 || !of || (of.op !== 'name' && of.op !== 'column')) {
		throw new FormulaProblem('given takes the name of a reading.');
	}
	return { op: 'given', of };
}

function endsInCondition(args: MathNode[]): boolean {
	const last = args.at(-1) as unknown as PlainNode | undefined;
	const bare = last?.type === 'ParenthesisNode' ? (last.content as unknown as PlainNode) : last;
	const fn = String(bare?.fn);
	const called = bare?.type === 'FunctionNode' && bare.name === 'given';
	return (
		called ||
		(bare?.type === 'OperatorNode' && (Object.hasOwn(comparisons, fn) || ['and', 'or', 'not'].includes(fn)))
	);
}

/** The table that a function of columns runs over: that of its columns; where parents' columns stand too, the children's. */
function tableRunOver(name: string, args: MathNode[], scope: FormulaScope): string {
	const tables = new Set<string>();
	for (const arg of args) {
		arg.traverse((node) => {
			const plain = node as unknown as PlainNode;
			const table = plain.type === 'SymbolNode' ? tableOfColumn(plain.name ?? '', scope) : null;
			if (table !== null) tables.add(table);
		});
	}
	if (tables.size === 0) throw new FormulaProblem(`${name}(...) wants a column.`);
	for (const table of tables) {
		const ancestors = scope.tables.get(table)?.ancestors ?? [];
		if ([...tables].every((other) => other === table || ancestors.includes(other))) return table;
	}
	throw new FormulaProblem(`${name}(...) mixes columns of tables that have nothing to do with each other.`);
}
