import { parse, type MathNode } from 'mathjs/number';
import { isUnitSymbol } from '$lib/quantities';
import { columnFunctions, valueFunctions } from './formula';
import type { Formula } from './types';

/** A formula that cannot be taken: what about it, in words for its author. */
export class FormulaProblem extends Error {
	override readonly name = 'FormulaProblem';
}

/** The names that a formula may use. */
export interface FormulaScope {
	/** constants, parameters, slopes, intercepts, results */
	names: ReadonlySet<string>;
	/** column name -> its table; columns of several tables that share a name map to null */
	columns: ReadonlyMap<string, string | null>;
	/** the table whose rows the formula runs over; null for a result */
	table: string | null;
}

const operators = {
	add: 'add',
	subtract: 'subtract',
	multiply: 'multiply',
	divide: 'divide',
	pow: 'power'
} as const;

/**
 * Ordinary infix mathematics as a JSON tree. The library parses; only numbers, names, units, + - * / ^ and the listed
 * functions pass. A name of the worksheet comes before a unit of the same spelling.
 * @throws FormulaProblem
 */
export function parseFormula(text: string, scope: FormulaScope): Formula {
	let node: MathNode;
	try {
		node = parse(text);
	} catch (cause) {
		throw new FormulaProblem(
			`"${text}" is not a formula: ${cause instanceof Error ? cause.message : String(cause)}`
		);
	}
	return convert(node, scope, false);
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

function convert(node: MathNode, scope: FormulaScope, insideColumnFunction: boolean): Formula {
	const plain = node as unknown as PlainNode;
	const inner = (part: MathNode | undefined) => {
		if (!part) throw new FormulaProblem(`"${node.toString()}" is incomplete.`);
		return convert(part, scope, insideColumnFunction);
	};
	switch (plain.type) {
		case 'ConstantNode':
			if (typeof plain.value !== 'number') throw new FormulaProblem(`"${node.toString()}" is not a number.`);
			return { op: 'number', value: plain.value, text: String(plain.value) };
		case 'ParenthesisNode':
			return inner(plain.content);
		case 'SymbolNode':
			return convertName(plain.name ?? '', scope, insideColumnFunction);
		case 'OperatorNode': {
			const [left, right] = plain.args ?? [];
			if (plain.fn === 'unaryMinus') return { op: 'negate', of: inner(left) };
			if (plain.fn === 'unaryPlus') return inner(left);
			const fn = String(plain.fn);
			if (!Object.hasOwn(operators, fn))
				throw new FormulaProblem(`"${node.toString()}" uses something other than + - * / ^.`);
			return { op: operators[fn as keyof typeof operators], left: inner(left), right: inner(right) };
		}
		case 'FunctionNode':
			return convertCall(plain, scope);
		default:
			throw new FormulaProblem(`"${node.toString()}" is not part of a formula here.`);
	}
}

function convertName(name: string, scope: FormulaScope, insideColumnFunction: boolean): Formula {
	const table = scope.columns.get(name);
	if (table !== undefined) {
		if (table === null) throw new FormulaProblem(`"${name}" is a column of more than one table.`);
		if (table === scope.table || insideColumnFunction) return { op: 'column', table, column: name };
		throw new FormulaProblem(`"${name}" is a whole column. Put it into mean(${name}) or sum(${name}).`);
	}
	if (scope.names.has(name)) return { op: 'name', name };
	if (isUnitSymbol(name)) return { op: 'unit', unit: name };
	throw new FormulaProblem(`"${name}" is neither a name of this experiment nor a unit.`);
}

function convertCall(node: PlainNode, scope: FormulaScope): Formula {
	const name = node.name ?? (node.fn as { name?: string } | undefined)?.name ?? '';
	const args = node.args ?? [];
	const ofColumn = Object.hasOwn(columnFunctions, name);
	if (!ofColumn && !Object.hasOwn(valueFunctions, name)) {
		const known = [...Object.keys(valueFunctions), ...Object.keys(columnFunctions)].join(', ');
		throw new FormulaProblem(
			`"${name}" is not a function here. The functions are ${known}; for a product write ${name} * (...).`
		);
	}
	const [argument] = args;
	if (args.length !== 1 || !argument) throw new FormulaProblem(`${name} takes one value.`);
	const converted = convert(argument, scope, ofColumn);
	if (ofColumn && !mentionsColumn(converted)) throw new FormulaProblem(`${name}(...) wants a column.`);
	return { op: 'call', function: name, arguments: [converted] };
}

function mentionsColumn(formula: Formula): boolean {
	switch (formula.op) {
		case 'column':
			return true;
		case 'negate':
			return mentionsColumn(formula.of);
		case 'call':
			return formula.arguments.some(mentionsColumn);
		case 'number':
		case 'unit':
		case 'name':
			return false;
		default:
			return mentionsColumn(formula.left) || mentionsColumn(formula.right);
	}
}
