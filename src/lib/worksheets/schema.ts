import { exactly, parseUnit, QuantityProblem, toldIn, type Quantity } from '$lib/quantities';
import { evaluateFormula, type Leaf } from './formula';
import { FormulaProblem, parseFormula, type FormulaScope } from './formula-parser';
import { orderSteps } from './order';
import { WorksheetSchemaProblem } from './schema-problem';
import { worksheetSource, type WorksheetSource } from './source-schema';
import type { ColumnDefinition, Formula, ResultDefinition, Worksheet } from './types';

/** Path of a field in the source, e.g. ['tables', 0, 'columns', 2, 'formula']. */
export type FieldPath = (string | number)[];

/** Finds the line on which a field stands; null when the source is not text. */
export type LineFinder = (path: FieldPath) => number | null;

/**
 * Checks a worksheet's source (parsed YAML or JSON), parses its formulas, holds their units against those declared,
 * and puts everything computed into order.
 * @throws WorksheetSchemaProblem with file, line (where `lineOf` knows it) and field
 */
export function readWorksheet(source: unknown, file: string, lineOf: LineFinder = () => null): Worksheet {
	const fail = (path: FieldPath, reason: string): never => {
		throw new WorksheetSchemaProblem(file, lineOf(path), sayPath(path), reason);
	};
	const parsed = worksheetSource.safeParse(source);
	if (!parsed.success) {
		const [issue] = parsed.error.issues;
		const path = (issue?.path ?? []).map((part) => (typeof part === 'symbol' ? String(part) : part));
		return fail(path, issue?.message ?? 'not a worksheet');
	}
	const data = parsed.data;
	checkNames(data, fail);
	const scope = scopeOf(data);
	const compile = (text: string, table: string | null, path: FieldPath): Formula => {
		try {
			return parseFormula(text, { ...scope, table });
		} catch (cause) {
			if (!(cause instanceof FormulaProblem)) throw cause;
			return fail(path, cause.message);
		}
	};
	const tables = data.tables.map((table, t) => ({
		...table,
		columns: table.columns.map((column, c): ColumnDefinition => {
			const path = ['tables', t, 'columns', c, 'formula'];
			if (column.kind === 'number' && column.unit === undefined)
				fail(['tables', t, 'columns', c, 'unit'], 'A number column states its unit, "1" for none.');
			const { formula } = column;
			return {
				...column,
				unit: column.kind === 'number' ? (column.unit ?? '1') : '',
				formula: formula === null ? null : compile(formula, table.name, path),
				formulaText: formula
			};
		})
	}));
	const results = data.results.map((result, i): ResultDefinition => ({
		...result,
		formula: compile(result.formula, null, ['results', i, 'formula']),
		formulaText: result.formula
	}));
	const rubrics = {
		report: {
			...data.rubrics.report,
			criteria: data.rubrics.report.criteria.map((criterion) => ({
				...criterion,
				levels: criterion.levels.map((level, i) => ({ level: i, ...level }))
			}))
		}
	};
	const worksheet: Worksheet = { ...data, tables, results, rubrics, order: [] };
	const ordered = orderSteps(worksheet);
	if ('cycle' in ordered)
		return fail(['results'], `These need each other in a circle: ${ordered.cycle.join(', ')}.`);
	checkUnits(worksheet, fail);
	return { ...worksheet, order: ordered.order };
}

type Fail = (path: FieldPath, reason: string) => never;

function sayPath(path: FieldPath): string {
	return path
		.map((part) => (typeof part === 'number' ? `[${part + 1}]` : part))
		.join('.')
		.replace(/\.\[/g, '[');
}

function scopeOf(data: WorksheetSource): FormulaScope {
	const columns = new Map<string, string | null>();
	for (const table of data.tables) {
		for (const column of table.columns)
			columns.set(column.name, columns.has(column.name) ? null : table.name);
	}
	const names = new Set([
		...data.constants.map(({ name }) => name),
		...data.parameters.map(({ name }) => name),
		...data.fits.flatMap((fit) => [fit.slope.name, fit.intercept.name]),
		...data.results.map(({ name }) => name)
	]);
	return { names, columns, table: null };
}

/** Names are told apart everywhere, because a link in a report gives the name alone; references lead somewhere. */
function checkNames(data: WorksheetSource, fail: Fail): void {
	const taken = new Map<string, string>();
	const take = (name: string, path: FieldPath): void => {
		const other = taken.get(name);
		if (other !== undefined) fail(path, `"${name}" is the name of ${other} already.`);
		taken.set(name, sayPath(path));
	};
	data.constants.forEach(({ name }, i) => take(name, ['constants', i, 'name']));
	data.parameters.forEach(({ name }, i) => take(name, ['parameters', i, 'name']));
	data.tables.forEach((table, t) =>
		table.columns.forEach(({ name }, c) => take(name, ['tables', t, 'columns', c, 'name']))
	);
	data.results.forEach(({ name }, i) => take(name, ['results', i, 'name']));
	data.fits.forEach((fit, i) => {
		take(fit.slope.name, ['fits', i, 'slope', 'name']);
		take(fit.intercept.name, ['fits', i, 'intercept', 'name']);
		const table = data.tables.find(({ name }) => name === fit.table);
		if (!table) fail(['fits', i, 'table'], `There is no table "${fit.table}".`);
		for (const axis of ['x', 'y'] as const) {
			const known = table?.columns.some(({ name, kind }) => name === fit[axis] && kind === 'number');
			if (!known) fail(['fits', i, axis], `"${fit[axis]}" is not a number column of ${fit.table}.`);
		}
	});
	data.figures.forEach(({ fit }, i) => {
		if (!data.fits.some(({ name }) => name === fit)) fail(['figures', i, 'fit'], `There is no fit "${fit}".`);
	});
	data.comparisons.forEach(({ quantity, reference }, i) => {
		const results = data.results.map(({ name }) => name);
		if (!results.includes(quantity))
			fail(['comparisons', i, 'quantity'], `There is no result "${quantity}".`);
		const at = reference.interpolate?.at;
		if (at !== undefined && !results.includes(at))
			fail(['comparisons', i, 'reference', 'interpolate', 'at'], `There is no result "${at}".`);
	});
	data.requirements.forEach((requirement, i) =>
		checkRequirement(data, requirement, (field, reason) => fail(['requirements', i, field], reason))
	);
}

function checkRequirement(
	data: WorksheetSource,
	requirement: WorksheetSource['requirements'][number],
	fail: (field: string, reason: string) => never
): void {
	if (requirement.kind === 'parameter') {
		if (!data.parameters.some(({ name }) => name === requirement.parameter))
			fail('parameter', `There is no parameter "${requirement.parameter}".`);
		return;
	}
	const table = data.tables.find(({ name }) => name === requirement.table);
	if (!table) fail('table', `There is no table "${requirement.table}".`);
	if (requirement.kind === 'span' && !table?.columns.some(({ name }) => name === requirement.column)) {
		fail('column', `There is no column "${requirement.column}" in ${requirement.table}.`);
	}
}

/** Runs every formula once on stand-in values, so that a unit that does not fit shows while the experiment is written. */
function checkUnits(worksheet: Worksheet, fail: Fail): void {
	const units = new Map<string, string>();
	for (const { name, unit } of [...worksheet.constants, ...worksheet.parameters, ...worksheet.results])
		units.set(name, unit);
	for (const fit of worksheet.fits)
		for (const { name, unit } of [fit.slope, fit.intercept]) units.set(name, unit);
	for (const table of worksheet.tables) for (const { name, unit } of table.columns) units.set(name, unit);
	const standIn = (leaf: Leaf): Quantity => {
		if (leaf.op === 'call') return evaluateFormula(leaf.arguments[0] ?? leaf, standIn);
		// a value away from 0 and 1, so that logarithms and quotients exist
		return exactly(1.7, parseUnit(units.get(leaf.op === 'name' ? leaf.name : leaf.column) ?? '1'));
	};
	const check = (formula: Formula, unit: string, path: FieldPath): void => {
		try {
			toldIn(evaluateFormula(formula, standIn), parseUnit(unit));
		} catch (cause) {
			if (!(cause instanceof QuantityProblem)) throw cause;
			if (cause.code === 'dimension' || cause.code === 'temperature-points') fail(path, cause.message);
		}
	};
	worksheet.tables.forEach((table, t) =>
		table.columns.forEach(
			({ formula, unit }, c) => formula && check(formula, unit, ['tables', t, 'columns', c, 'formula'])
		)
	);
	worksheet.results.forEach(({ formula, unit }, i) => check(formula, unit, ['results', i, 'formula']));
	worksheet.fits.forEach((fit, i) => {
		const axis = (column: string): Formula => ({ op: 'column', table: fit.table, column });
		check({ op: 'divide', left: axis(fit.y), right: axis(fit.x) }, fit.slope.unit, [
			'fits',
			i,
			'slope',
			'unit'
		]);
		check(axis(fit.y), fit.intercept.unit, ['fits', i, 'intercept', 'unit']);
	});
	worksheet.comparisons.forEach(({ quantity, reference }, i) => {
		check({ op: 'name', name: quantity }, reference.unit, ['comparisons', i, 'reference', 'unit']);
	});
}
