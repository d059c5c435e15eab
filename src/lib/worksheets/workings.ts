import {
	divideUnits,
	intervalUnit,
	isExact,
	parseUnit,
	QuantityProblem,
	roundToUncertainty,
	standardUncertainty,
	differenceIn,
	toldIn,
	unitTex,
	unitText,
	valueIn,
	type Quantity,
	type Source,
	type Unit
} from '$lib/quantities';
import { fitWorkings, resultTex } from './fit-workings';
import { evaluateFormula, holds, type Surroundings } from './formula';
import { isLeaf, leafKey, leavesOf, type Leaf } from './formula-tree';
import { NotThere } from './lookup';
import { namedValues, namingFor } from './named';
import { findColumn, namingOf, thingsByRow } from './naming';
import { ancestorIn, inUse, type RowState } from './rows';
import type { Session } from './session';
import { fitsByName } from './show-fits';
import { plainDigits, showBudget } from './shown';
import { numberTex } from './tex-numbers';
import { typeset } from './typeset';
import type { Formula, SampleCalculation } from './types';

/** Rows of one table whose results are worked out one by one; beyond them only those chosen. */
const mostByRow = 24;

/**
 * A sample calculation for every computed column, every fit's parameters and every result. A column's is of the row chosen
 * for its table (table name -> row id) where that one counts, else of the first row in use; results by row have one for
 * each.
 */
export function showWorkings(
	session: Session,
	chosenRows: Readonly<Record<string, string>> = {},
	kept = new WeakMap<Quantity, SampleCalculation>()
): Record<string, SampleCalculation> {
	/** A value that is the very same came about in the same way. */
	const once = (name: string, quantity: Quantity, work: () => SampleCalculation): SampleCalculation => {
		let calculation = kept.get(quantity);
		if (calculation?.name !== name) kept.set(quantity, (calculation = work()));
		return calculation;
	};
	const workings: Record<string, SampleCalculation> = {};
	const byRow = new Set(thingsByRow(session.worksheet).map(({ name }) => name));
	for (const table of session.worksheet.tables) {
		const counting = (session.rows.tables.get(table.name) ?? []).filter(inUse);
		const chosen = counting.find((state) => state.row.id === chosenRows[table.name]);
		for (const column of table.columns) {
			const { formula } = column;
			if (!formula || formula.op === 'fitted' || byRow.has(column.name)) continue;
			// a column with a condition has no value in some rows
			const row =
				chosen?.values.has(column.name) === true
					? chosen
					: counting.find(({ values }) => values.has(column.name));
			const value = row?.values.get(column.name);
			if (row && value)
				workings[column.name] = once(column.name, value, () => workOut(session, column, formula, value, row));
		}
	}
	for (const { name, row, group, fitted } of fitsByName(session))
		Object.assign(
			workings,
			fitWorkings(session, fitted, name.slice(fitted.definition.name.length), row, group)
		);
	const counts = new Map<string, number>();
	for (const value of namedValues(session)) {
		const { naming, row, quantity } = value;
		const result = session.worksheet.results.find(({ name }) => name === naming.name);
		if (!result) continue;
		const count = (counts.get(result.name) ?? 0) + 1;
		counts.set(result.name, count);
		if (count > mostByRow && row?.row.id !== chosenRows[row?.table ?? '']) continue;
		workings[value.name] = once(value.name, quantity, () =>
			workOut(session, namingFor(value), result.formula, quantity, row, naming)
		);
	}
	return workings;
}

interface Subject {
	name: string;
	label: string;
	symbol: string;
	unit: string;
}

function workOut(
	calculation: Session,
	subject: Subject,
	formula: Formula,
	value: Quantity,
	row: RowState | null,
	declared: Subject = subject
): SampleCalculation {
	const surroundings = calculation.surroundingsOf(declared.name, row);
	const lookUp = (leaf: Leaf) => surroundings.quantity(leaf);
	const symbolic = typeset(formula, {
		leaf: (leaf) => leafSymbol(calculation, leaf),
		celsius: (part) =>
			`${isLeaf(part) ? leafSymbol(calculation, part) : '\\vartheta'}/\\mathrm{{}^{\\circ}C}`,
		overUnit: () => null,
		times: '\\,'
	});
	const settled = taken(formula, surroundings);
	const substituted = typeset(settled, {
		leaf: (leaf) => leafNumber(calculation, leaf, lookUp(leaf), row),
		celsius: (part) =>
			(isLeaf(part) && typedText(calculation, part, row)) ||
			guarded(evaluateFormula(part, surroundings), parseUnit('degC')),
		overUnit: (left, unit) =>
			isLeaf(left) ? convertedNumber(calculation, left, lookUp(left), row, parseUnit(unit)) : null,
		times: ' \\times '
	});
	return {
		name: subject.name,
		title:
			row === null || declared !== subject
				? subject.label
				: `${subject.label}, ${lower(calculation.callRow(row))}`,
		row: row?.row.id ?? null,
		symbolic: sameTex(subject.symbol, symbolic) ? symbolic : `${subject.symbol} = ${symbolic}`,
		substituted: `${subject.symbol} = ${substituted}`,
		result: `${subject.symbol} = ${resultTex(value, subject.unit)}`,
		partials: partials(calculation, subject, settled, surroundings),
		budget: showBudget(toldIn(value, parseUnit(subject.unit)))
	};
}

/** Derivative towards each uncertain leaf: the leaf alone keeps its uncertainty, as one source, and its part is read off. */
function partials(
	calculation: Session,
	subject: Subject,
	formula: Formula,
	surroundings: Surroundings
): SampleCalculation['partials'] {
	const leaves = leavesOf(formula);
	return leaves.flatMap((leaf) => {
		const input = known(surroundings, leaf);
		if (!input) return [];
		if (isExact(input)) return [];
		const probe: Source = { component: { id: 'probe', label: '', scope: 'run', degreesOfFreedom: Infinity } };
		const key = leafKey(leaf);
		const size = standardUncertainty(input);
		const output = probed(formula, {
			text: (other) => surroundings.text(other),
			given: (other) => surroundings.given(other),
			step: () => surroundings.step(),
			quantity: (other) => {
				const quantity = surroundings.quantity(other);
				return { ...quantity, parts: leafKey(other) === key ? new Map([[probe, size]]) : new Map() };
			}
		});
		if (!output) return [];
		const unitOut = intervalUnit(parseUnit(subject.unit));
		const unitIn = intervalUnit(leafUnit(calculation, leaf, input));
		const symbol = leafSymbol(calculation, leaf);
		return [
			{
				symbol,
				tex: `\\frac{\\partial ${subject.symbol}}{\\partial ${symbol}}`,
				value: (((output.parts.get(probe) ?? 0) / size) * unitIn.factor) / unitOut.factor,
				unit: unitText(divideUnits(unitOut, unitIn))
			}
		];
	});
}

/** At the edge of what numbers hold, the value exists while its parts, added up otherwise, do not: no derivative then. */
function probed(formula: Formula, surroundings: Surroundings): Quantity | null {
	try {
		return evaluateFormula(formula, surroundings);
	} catch (cause) {
		if (cause instanceof QuantityProblem) return null;
		throw cause;
	}
}

/** The formula with each condition settled: the branch that is not taken may lack its values. */
function taken(formula: Formula, surroundings: Surroundings): Formula {
	const inner = (part: Formula) => taken(part, surroundings);
	switch (formula.op) {
		case 'if':
			return inner(holds(formula.condition, surroundings) ? formula.yes : formula.no);
		case 'negate':
			return { ...formula, of: inner(formula.of) };
		case 'add':
		case 'subtract':
		case 'multiply':
		case 'divide':
		case 'power':
			return { ...formula, left: inner(formula.left), right: inner(formula.right) };
		case 'call':
			return { ...formula, arguments: formula.arguments.map(inner) };
		default:
			return formula;
	}
}

function known(surroundings: Surroundings, leaf: Leaf): Quantity | null {
	try {
		return surroundings.quantity(leaf);
	} catch (cause) {
		if (cause instanceof NotThere || cause instanceof QuantityProblem) return null;
		throw cause;
	}
}

function lower(text: string): string {
	return text.charAt(0).toLowerCase() + text.slice(1);
}

function leafSymbol(calculation: Session, leaf: Leaf): string {
	if (leaf.op === 'column')
		return findColumn(calculation.worksheet, leaf.table, leaf.column)?.symbol ?? leaf.column;
	if (leaf.op === 'name') return namingOf(calculation.worksheet, leaf.name)?.symbol ?? leaf.name;
	const parts = leaf.arguments.map((argument) =>
		typeset(argument, {
			leaf: (inner) => leafSymbol(calculation, inner),
			celsius: (part) => (isLeaf(part) ? leafSymbol(calculation, part) : '\\vartheta'),
			overUnit: () => null,
			times: '\\,'
		})
	);
	return overTex(leaf.function, parts);
}

/** A function of columns as mathematics writes it; conditions are told by the template, not by the symbol. */
function overTex(name: string, [first = '', second = '', third = '', fourth = '']: string[]): string {
	switch (name) {
		case 'mean':
		case 'weighted_mean':
			return `\\overline{${first}}`;
		case 'sum':
			return `\\sum ${first}`;
		case 'integral':
			return `\\int_{${third}}^{${fourth}} ${first}\\,\\mathrm{d}${second}`;
		case 'interpolate':
			return `${first}\\big|_{${second} = ${third}}`;
		case 'count':
			return `n\\left(${first}\\right)`;
		case 's':
			return `s\\left(${first}\\right)`;
		default:
			return `{${first}}_{\\mathrm{${name}}}`;
	}
}

function leafUnit(calculation: Session, leaf: Leaf, value: Quantity): Unit {
	if (leaf.op === 'column')
		return parseUnit(findColumn(calculation.worksheet, leaf.table, leaf.column)?.unit ?? '1');
	if (leaf.op === 'name') return parseUnit(namingOf(calculation.worksheet, leaf.name)?.unit ?? '1');
	return value.unit;
}

/** A leaf as a number with its unit: as typed where it was typed, else with two digits more than its uncertainty allows. */
function leafNumber(calculation: Session, leaf: Leaf, value: Quantity, row: RowState | null): string {
	const unit = leafUnit(calculation, leaf, value);
	const typed = typedText(calculation, leaf, row);
	const number = typed ?? guarded(value, unit);
	const unitPart = unitTex(unit);
	return unitPart === '' ? number : `${number}~${unitPart}`;
}

/** A leaf over a unit of another size, with the factor between them: 399.2 x 133.322 Pa/Pa. */
function convertedNumber(
	calculation: Session,
	leaf: Leaf,
	value: Quantity,
	row: RowState | null,
	to: Unit
): string | null {
	const from = leafUnit(calculation, leaf, value);
	if (from.factor === to.factor || from.offset !== 0 || to.offset !== 0) return null;
	const digits = typedText(calculation, leaf, row) ?? guarded(value, from);
	return `${digits} \\times ${numberTex(from.factor / to.factor, to)}/${unitTex(to)}`;
}

function typedText(calculation: Session, leaf: Leaf, row: RowState | null): string | null {
	if (leaf.op === 'name') return plainDigits(calculation.parameters.get(leaf.name)?.typed);
	if (leaf.op !== 'column' || findColumn(calculation.worksheet, leaf.table, leaf.column)?.formula !== null)
		return null;
	return plainDigits((row && ancestorIn(row, leaf.table))?.row.cells[leaf.column]);
}

/** Digits enough that somebody who computes with what is printed finds the printed result. */
function guarded(value: Quantity, unit: Unit): string {
	const u = differenceIn(standardUncertainty(value), unit);
	if (u === 0) {
		const [digits = '0', exponent] = String(valueIn(value, unit)).split('e');
		return exponent === undefined ? digits : `${digits}\\times 10^{${exponent}}`;
	}
	const { mantissa, exponent } = roundToUncertainty(valueIn(value, unit), u / 100);
	return exponent === 0 ? mantissa : `${mantissa}\\times 10^{${exponent}}`;
}

/** The same formula but for the size of its parentheses. */
function sameTex(a: string, b: string): boolean {
	const bare = (tex: string) => tex.replace(/\\left|\\right/g, '');
	return bare(a) === bare(b);
}
