import {
	exactly,
	parseUnit,
	QuantityProblem,
	toldIn,
	withDeviations,
	type Component,
	type Quantity
} from '$lib/quantities';
import { fitLine, FitProblem, type LineFit } from '$lib/regression';
import { columnFunctions, evaluateFormula, tableOf, type Leaf } from './formula';
import { readReadings, type ReadState, type RowState } from './read-readings';
import { Sources } from './sources';
import type {
	ColumnDefinition,
	FitDefinition,
	Problem,
	Readings,
	ResultDefinition,
	Worksheet
} from './types';

export interface FittedLine {
	definition: FitDefinition;
	fit: LineFit;
	/** the rows it runs over, in order */
	rows: RowState[];
}

/** Everything computed, before any of it is shown. */
export interface Calculation {
	worksheet: Worksheet;
	tables: ReadState['tables'];
	parameters: ReadState['parameters'];
	/** constants, parameters, slopes, intercepts, results */
	names: Map<string, Quantity>;
	fits: Map<string, FittedLine>;
	problems: Problem[];
}

/** A value that a formula needs and that is not there; its own cause has been told already. */
class NotThere extends Error {
	constructor(readonly what: string) {
		super(what);
	}
}

/** Works through the worksheet in the order that its author's formulas need. */
export function calculate(worksheet: Worksheet, readings: Readings): Calculation {
	const { tables, parameters, problems } = readReadings(worksheet, readings, new Sources());
	const names = new Map<string, Quantity>();
	for (const constant of worksheet.constants) names.set(constant.name, constantQuantity(constant));
	for (const [name, { quantity }] of parameters) names.set(name, quantity);
	const calculation: Calculation = { worksheet, tables, parameters, names, fits: new Map(), problems };
	for (const step of worksheet.order) {
		if (step.kind === 'column') computeColumn(calculation, step.table, step.column);
		else if (step.kind === 'fit') computeFit(calculation, step.name);
		else computeResult(calculation, step.name);
	}
	return calculation;
}

function constantQuantity({
	name,
	label,
	value,
	unit: unitName,
	standardUncertainty
}: Worksheet['constants'][number]): Quantity {
	const unit = parseUnit(unitName);
	const quantity = { ...exactly(value, unit), point: false };
	if (standardUncertainty === null) return quantity;
	const component: Component = { id: name, label, scope: 'course', degreesOfFreedom: Infinity };
	return withDeviations(quantity, [[{ component }, standardUncertainty * unit.factor]]);
}

/** Leaves as they are for one row, or for no row at all. */
export function lookUpIn(calculation: Calculation, row: RowState | null): (leaf: Leaf) => Quantity {
	return (leaf) => {
		if (leaf.op === 'name') return there(calculation.names.get(leaf.name), leaf.name);
		if (leaf.op === 'column') return there(row?.values.get(leaf.column), leaf.column);
		const combine = Object.hasOwn(columnFunctions, leaf.function)
			? columnFunctions[leaf.function]
			: undefined;
		const [argument] = leaf.arguments;
		const table = argument && tableOf(argument);
		if (!combine || !argument || !table) throw new NotThere(leaf.function);
		const rows = rowsInUse(calculation, table);
		return combine(rows.map((each) => evaluateFormula(argument, lookUpIn(calculation, each))));
	};
}

export function rowsInUse(calculation: Calculation, table: string): RowState[] {
	return (calculation.tables.get(table) ?? []).filter((row) => row.counts);
}

function there(quantity: Quantity | undefined, what: string): Quantity {
	if (!quantity) throw new NotThere(what);
	return quantity;
}

function computeColumn(calculation: Calculation, table: string, name: string): void {
	const column = findColumn(calculation.worksheet, table, name);
	if (!column?.formula) return;
	const unit = parseUnit(column.unit);
	let waits: string | null = null;
	for (const row of calculation.tables.get(table) ?? []) {
		if (row.blank) continue;
		try {
			row.values.set(name, toldIn(evaluateFormula(column.formula, lookUpIn(calculation, row)), unit));
		} catch (cause) {
			row.counts = false;
			if (cause instanceof QuantityProblem) {
				const message = `Row ${row.number}, ${name}: ${cause.message}`;
				row.cellProblems.set(name, message);
				calculation.problems.push({
					severity: 'error',
					code: cause.code,
					message,
					table,
					row: row.row.id,
					column: name
				});
			} else if (cause instanceof NotThere)
				waits = calculation.worksheet.parameters.some((p) => p.name === cause.what) ? cause.what : waits;
			else throw cause;
		}
	}
	if (waits !== null) {
		const message = `${column.label} waits for ${labelOf(calculation.worksheet, waits)}.`;
		calculation.problems.push({
			severity: 'error',
			code: 'waits',
			message,
			table,
			column: name,
			parameter: waits
		});
	}
}

function computeFit(calculation: Calculation, name: string): void {
	const definition = calculation.worksheet.fits.find((fit) => fit.name === name);
	if (!definition) return;
	const rows = rowsInUse(calculation, definition.table);
	try {
		const fit = fitLine(
			rows.map((row) => there(row.values.get(definition.x), definition.x)),
			rows.map((row) => there(row.values.get(definition.y), definition.y)),
			{
				id: name,
				scatterLabel: `Scatter about the line (${definition.label})`,
				policy: definition.policy,
				weights: definition.weights
			}
		);
		calculation.fits.set(name, { definition, fit, rows });
		calculation.names.set(definition.slope.name, toldIn(fit.slope, parseUnit(definition.slope.unit)));
		calculation.names.set(
			definition.intercept.name,
			toldIn(fit.intercept, parseUnit(definition.intercept.unit))
		);
	} catch (cause) {
		if (!(cause instanceof FitProblem)) throw cause;
		const blank = rows.length === 0;
		const message = blank
			? `${definition.label}: no complete row yet. Type, paste or upload readings.`
			: `${definition.label}: ${cause.message}`;
		calculation.problems.push({ severity: 'error', code: cause.code, message, name });
	}
}

function computeResult(calculation: Calculation, name: string): void {
	const definition = calculation.worksheet.results.find((result) => result.name === name);
	if (!definition) return;
	try {
		const value = evaluateFormula(definition.formula, lookUpIn(calculation, null));
		calculation.names.set(name, toldIn(value, parseUnit(definition.unit)));
	} catch (cause) {
		calculation.problems.push(resultProblem(calculation.worksheet, definition, cause));
	}
}

function resultProblem(worksheet: Worksheet, { name, label }: ResultDefinition, cause: unknown): Problem {
	if (cause instanceof NotThere) {
		const message = `${label} is not computed yet: it waits for ${labelOf(worksheet, cause.what)}.`;
		return { severity: 'note', code: 'waits', message, name };
	}
	if (cause instanceof QuantityProblem) {
		return { severity: 'error', code: cause.code, message: `${label}: ${cause.message}`, name };
	}
	throw cause;
}

export function findColumn(worksheet: Worksheet, table: string, name: string): ColumnDefinition | undefined {
	return worksheet.tables
		.find((candidate) => candidate.name === table)
		?.columns.find((column) => column.name === name);
}

export interface NamedThing {
	name: string;
	label: string;
	symbol: string;
	unit: string;
}

/** Everything with a name of its own: constants, parameters, fits' parameters, results. */
export function namedThings(worksheet: Worksheet): NamedThing[] {
	return [
		...worksheet.constants,
		...worksheet.parameters,
		...worksheet.fits.flatMap((fit) => [fit.slope, fit.intercept]),
		...worksheet.results
	];
}

function labelOf(worksheet: Worksheet, name: string): string {
	const label = namedThings(worksheet).find((thing) => thing.name === name)?.label ?? name;
	return label.charAt(0).toLowerCase() + label.slice(1);
}
