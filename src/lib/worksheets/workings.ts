import {
	dimensionless,
	divideUnits,
	formatQuantity,
	intervalUnit,
	isExact,
	parseUnit,
	QuantityProblem,
	roundToUncertainty,
	standardUncertainty,
	differenceIn,
	toldIn,
	unitOne,
	unitTex,
	unitText,
	valueIn,
	type Quantity,
	type Source,
	type Unit
} from '$lib/quantities';
import { findColumn, lookUpIn, namedThings, type Calculation, type FittedLine } from './calculation';
import { evaluateFormula, isLeaf, leafKey, leavesOf, type Leaf } from './formula';
import type { RowState } from './read-readings';
import { plainDigits, showBudget } from './shown';
import { typeset } from './typeset';
import type { Formula, SampleCalculation } from './types';

/**
 * A sample calculation for every computed column, every fit's parameters and every result. A column's is of the row chosen
 * for its table (table name -> row id) where that one counts, else of the first row in use.
 */
export function showWorkings(
	calculation: Calculation,
	chosenRows: Readonly<Record<string, string>> = {}
): Record<string, SampleCalculation> {
	const workings: Record<string, SampleCalculation> = {};
	for (const table of calculation.worksheet.tables) {
		const counting = calculation.tables.get(table.name)?.filter((state) => state.counts) ?? [];
		const row = counting.find((state) => state.row.id === chosenRows[table.name]) ?? counting[0];
		if (!row) continue;
		for (const column of table.columns) {
			const value = row.values.get(column.name);
			if (column.formula && value)
				workings[column.name] = workOut(calculation, column, column.formula, value, row);
		}
	}
	for (const fitted of calculation.fits.values()) Object.assign(workings, fitWorkings(calculation, fitted));
	for (const result of calculation.worksheet.results) {
		const value = calculation.names.get(result.name);
		if (value) workings[result.name] = workOut(calculation, result, result.formula, value, null);
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
	calculation: Calculation,
	subject: Subject,
	formula: Formula,
	value: Quantity,
	row: RowState | null
): SampleCalculation {
	const lookUp = lookUpIn(calculation, row);
	const symbolic = typeset(formula, {
		leaf: (leaf) => leafSymbol(calculation, leaf),
		celsius: (part) =>
			`${isLeaf(part) ? leafSymbol(calculation, part) : '\\vartheta'}/\\mathrm{{}^{\\circ}C}`,
		overUnit: () => null,
		times: '\\,'
	});
	const substituted = typeset(formula, {
		leaf: (leaf) => leafNumber(calculation, leaf, lookUp(leaf), row),
		celsius: (part) =>
			(isLeaf(part) && typedText(calculation, part, row)) ||
			guarded(evaluateFormula(part, lookUp), parseUnit('degC')),
		overUnit: (left, unit) =>
			isLeaf(left) ? convertedNumber(calculation, left, lookUp(left), row, parseUnit(unit)) : null,
		times: ' \\times '
	});
	return {
		name: subject.name,
		title: row === null ? subject.label : `${subject.label}, row ${row.number}`,
		row: row?.row.id ?? null,
		symbolic: sameTex(subject.symbol, symbolic) ? symbolic : `${subject.symbol} = ${symbolic}`,
		substituted: `${subject.symbol} = ${substituted}`,
		result: `${subject.symbol} = ${resultTex(value, subject.unit)}`,
		partials: partials(calculation, subject, formula, lookUp),
		budget: showBudget(toldIn(value, parseUnit(subject.unit)))
	};
}

function resultTex(value: Quantity, unitName: string): string {
	const unit = parseUnit(unitName);
	const u = standardUncertainty(value);
	return formatQuantity(valueIn(value, unit), u === 0 ? null : differenceIn(u, unit), unit).tex;
}

/** Derivative towards each uncertain leaf: the leaf alone keeps its uncertainty, as one source, and its part is read off. */
function partials(
	calculation: Calculation,
	subject: Subject,
	formula: Formula,
	lookUp: (leaf: Leaf) => Quantity
): SampleCalculation['partials'] {
	const leaves = leavesOf(formula);
	return leaves.flatMap((leaf) => {
		const input = lookUp(leaf);
		if (isExact(input)) return [];
		const probe: Source = { component: { id: 'probe', label: '', scope: 'run', degreesOfFreedom: Infinity } };
		const key = leafKey(leaf);
		const size = standardUncertainty(input);
		const output = probed(formula, (other) => {
			const quantity = lookUp(other);
			return { ...quantity, parts: leafKey(other) === key ? new Map([[probe, size]]) : new Map() };
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
function probed(formula: Formula, lookUp: (leaf: Leaf) => Quantity): Quantity | null {
	try {
		return evaluateFormula(formula, lookUp);
	} catch (cause) {
		if (cause instanceof QuantityProblem) return null;
		throw cause;
	}
}

function leafSymbol(calculation: Calculation, leaf: Leaf): string {
	if (leaf.op === 'column')
		return findColumn(calculation.worksheet, leaf.table, leaf.column)?.symbol ?? leaf.column;
	if (leaf.op === 'name')
		return namedThings(calculation.worksheet).find(({ name }) => name === leaf.name)?.symbol ?? leaf.name;
	const [argument] = leaf.arguments;
	const inside = argument
		? typeset(argument, {
				leaf: (inner) => leafSymbol(calculation, inner),
				celsius: (part) => (isLeaf(part) ? leafSymbol(calculation, part) : '\\vartheta'),
				overUnit: () => null,
				times: '\\,'
			})
		: '';
	return leaf.function === 'mean' ? `\\overline{${inside}}` : `\\sum ${inside}`;
}

function leafUnit(calculation: Calculation, leaf: Leaf, value: Quantity): Unit {
	if (leaf.op === 'column')
		return parseUnit(findColumn(calculation.worksheet, leaf.table, leaf.column)?.unit ?? '1');
	if (leaf.op === 'name')
		return parseUnit(namedThings(calculation.worksheet).find(({ name }) => name === leaf.name)?.unit ?? '1');
	return value.unit;
}

/** A leaf as a number with its unit: as typed where it was typed, else with two digits more than its uncertainty allows. */
function leafNumber(calculation: Calculation, leaf: Leaf, value: Quantity, row: RowState | null): string {
	const unit = leafUnit(calculation, leaf, value);
	const typed = typedText(calculation, leaf, row);
	const number = typed ?? guarded(value, unit);
	const unitPart = unitTex(unit);
	return unitPart === '' ? number : `${number}~${unitPart}`;
}

/** A leaf over a unit of another size, with the factor between them: 399.2 x 133.322 Pa/Pa. */
function convertedNumber(
	calculation: Calculation,
	leaf: Leaf,
	value: Quantity,
	row: RowState | null,
	to: Unit
): string | null {
	const from = leafUnit(calculation, leaf, value);
	if (from.factor === to.factor || from.offset !== 0 || to.offset !== 0) return null;
	const digits = typedText(calculation, leaf, row) ?? guarded(value, from);
	return `${digits} \\times ${number(from.factor / to.factor, to)}/${unitTex(to)}`;
}

function typedText(calculation: Calculation, leaf: Leaf, row: RowState | null): string | null {
	if (leaf.op === 'name') return plainDigits(calculation.parameters.get(leaf.name)?.typed);
	if (leaf.op !== 'column' || findColumn(calculation.worksheet, leaf.table, leaf.column)?.formula !== null)
		return null;
	return plainDigits(row?.row.cells[leaf.column]);
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

/** Slope and intercept of a line: the least-squares sums with their numbers. */
function fitWorkings(
	calculation: Calculation,
	{ definition, fit, rows }: FittedLine
): Record<string, SampleCalculation> {
	const unitOf = (column: string) =>
		parseUnit(findColumn(calculation.worksheet, definition.table, column)?.unit ?? '1');
	const symbolOf = (column: string) =>
		findColumn(calculation.worksheet, definition.table, column)?.symbol ?? column;
	const [unitX, unitY] = [unitOf(definition.x), unitOf(definition.y)];
	const bare = (value: number, unit: Unit) => number(value / unit.factor, unit);
	const [x, y] = [grouped(symbolOf(definition.x)), grouped(symbolOf(definition.y))];
	const w = definition.weights === 'stated' ? 'w\\,' : '';
	const { slope, intercept } = definition;
	const over = w === '' ? `n = ${rows.length}` : `n = ${rows.length},\\ w = 1/u^2`;
	const spread = `\\sum ${w}\\left(${x} - \\overline{${x}}\\right)`;
	const plain = (name: string): Quantity =>
		calculation.names.get(name) ?? { ...fit.slope, dimension: dimensionless, unit: unitOne };
	const common = (
		subject: Subject
	): Pick<SampleCalculation, 'name' | 'title' | 'row' | 'partials' | 'result' | 'budget'> => ({
		name: subject.name,
		title: `${subject.label}, ${definition.label}`,
		row: null,
		partials: [],
		result: `${subject.symbol} = ${resultTex(plain(subject.name), subject.unit)}`,
		budget: showBudget(toldIn(plain(subject.name), parseUnit(subject.unit)))
	});
	const squareX: Unit = {
		...unitX,
		factors: unitX.factors.map((factor) => ({ ...factor, exponent: factor.exponent * 2 })),
		factor: unitX.factor * unitX.factor
	};
	const product: Unit = {
		...unitX,
		factors: [...unitX.factors, ...unitY.factors],
		factor: unitX.factor * unitY.factor
	};
	return {
		[slope.name]: {
			...common(slope),
			symbolic: `${slope.symbol} = \\frac{${spread}\\left(${y} - \\overline{${y}}\\right)}{${spread}^2}`,
			substituted: `${slope.symbol} = \\frac{${bare(fit.slope.value * fit.spreadX, product)}}{${bare(fit.spreadX, squareX)}} \\quad (${over})`
		},
		[intercept.name]: {
			...common(intercept),
			symbolic: `${intercept.symbol} = \\overline{${y}} - ${slope.symbol}\\,\\overline{${x}}`,
			substituted: `${intercept.symbol} = ${bare(fit.centre.value, unitY)} - \\left(${bare(fit.slope.value, divideUnits(unitY, unitX))}\\right) \\times ${bare(fit.centreX, unitX)}`
		}
	};
}

function number(value: number, unit: Unit): string {
	const [digits = '0', exponent = '0'] = value.toExponential(6).split('e');
	const power = Number(exponent);
	const text =
		power >= -2 && power <= 5 ? String(Number(value.toPrecision(8))) : `${digits}\\times 10^{${power}}`;
	const unitPart = unitTex(unit);
	return unitPart === '' ? text : `${text}~${unitPart}`;
}

/** The same formula but for the size of its parentheses. */
function sameTex(a: string, b: string): boolean {
	const bare = (tex: string) => tex.replace(/\\left|\\right/g, '');
	return bare(a) === bare(b);
}

function grouped(symbol: string): string {
	return /[\s(]/.test(symbol) ? `{${symbol}}` : symbol;
}
