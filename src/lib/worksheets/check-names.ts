import { namingsOf, type Fail, type FieldPath } from './compile';
import { keySlug } from './relations';
import type { WorksheetSource } from './source-schema';

/** Names are told apart everywhere, because a link in a report gives the name alone; references lead somewhere. */
export function checkNames(
	data: WorksheetSource,
	ancestors: ReadonlyMap<string, readonly string[]>,
	fail: Fail
): void {
	checkUnique(data, fail);
	checkTables(data, fail);
	checkFits(data, ancestors, fail);
	const results = new Map(data.results.map((result) => [result.name, result]));
	data.results.forEach(({ per }, i) => {
		if (per !== null) requireKey(data, per, ['results', i, 'per'], fail);
	});
	data.figures.forEach((figure, i) => {
		if (figure.fit !== null && !data.fits.some(({ name }) => name === figure.fit))
			fail(['figures', i, 'fit'], `There is no fit "${figure.fit}".`);
		if (figure.table !== null) {
			for (const axis of ['x', 'y'] as const)
				requireNumberColumn(data, figure.table, figure[axis] ?? '', ['figures', i, axis], fail);
			if (figure.by !== null && !ancestors.get(figure.table)?.includes(figure.by))
				fail(['figures', i, 'by'], `Rows of ${figure.table} do not belong to "${figure.by}".`);
		}
	});
	data.comparisons.forEach(({ quantity, reference, references }, i) => {
		if (!results.has(quantity)) fail(['comparisons', i, 'quantity'], `There is no result "${quantity}".`);
		for (const one of [reference, ...Object.values(references)]) {
			const at = one?.interpolate?.at;
			if (at !== undefined && !results.has(at))
				fail(['comparisons', i, 'reference', 'interpolate', 'at'], `There is no result "${at}".`);
		}
	});
	data.requirements.forEach((requirement, i) => {
		const path = (field: string): FieldPath => ['requirements', i, field];
		if (requirement.kind === 'parameter') {
			if (!data.parameters.some(({ name }) => name === requirement.parameter))
				fail(path('parameter'), `There is no parameter "${requirement.parameter}".`);
			return;
		}
		if (requirement.table !== null) requireTable(data, requirement.table, path('table'), fail);
		if (requirement.kind === 'span')
			requireNumberColumn(data, requirement.table, requirement.column, path('column'), fail);
	});
}

function checkUnique(data: WorksheetSource, fail: Fail): void {
	const taken = new Map<string, string>();
	const take = (name: string, where: string, path: FieldPath): void => {
		const other = taken.get(name);
		if (other !== undefined) fail(path, `"${name}" is the name of ${other} already.`);
		taken.set(name, where);
	};
	const takeAll = (part: 'constants' | 'parameters' | 'results') =>
		data[part].forEach(({ name }, i) => take(name, `${part}[${i + 1}].name`, [part, i, 'name']));
	takeAll('constants');
	takeAll('parameters');
	data.tables.forEach((table, t) => {
		const within = new Set<string>();
		table.columns.forEach(({ name, kind }, c) => {
			const path = ['tables', t, 'columns', c, 'name'];
			if (within.has(name)) fail(path, `"${name}" is the name of another column of ${table.name}.`);
			within.add(name);
			if (kind === 'number') take(name, `column ${name} of ${table.name}`, path);
		});
	});
	takeAll('results');
	data.fits.forEach((fit, i) =>
		namingsOf(fit).forEach(({ name }, p) =>
			take(name, `a parameter of ${fit.name}`, ['fits', i, 'parameters', p, 'name'])
		)
	);
}

function checkTables(data: WorksheetSource, fail: Fail): void {
	data.tables.forEach((table, t) => {
		const at = (...rest: FieldPath): FieldPath => ['tables', t, ...rest];
		if (data.tables.findIndex(({ name }) => name === table.name) !== t)
			fail(at('name'), `"${table.name}" is the name of another table.`);
		const key = table.columns.find(({ name }) => name === table.key);
		if (table.key !== null && (!key || key.kind === 'number' || key.formula !== null))
			fail(at('key'), `"${table.key}" is no text or choice column of ${table.name}.`);
		if (table.fixed !== null) checkFixed(table, at, fail);
		table.columns.forEach((column, c) => {
			if (column.kind === 'choice' && column.choices.length === 0)
				fail(at('columns', c, 'choices'), 'A choice lists what there is to choose.');
			if (column.kind !== 'number' && (column.formula !== null || column.when !== null))
				fail(at('columns', c, 'formula'), 'Only numbers are computed.');
			if (column.when !== null && column.formula === null)
				fail(at('columns', c, 'when'), 'Only a computed column has a condition.');
			if (column.of === null) return;
			if (column.kind === 'number')
				fail(at('columns', c, 'of'), 'A text or choice names the row it belongs to.');
			requireKey(data, column.of, at('columns', c, 'of'), fail);
		});
	});
}

function checkFixed(
	table: WorksheetSource['tables'][number],
	at: (...rest: FieldPath) => FieldPath,
	fail: Fail
): void {
	const { key, fixed } = table;
	if (key === null) fail(at('key'), 'A table with fixed rows has a key.');
	const slugs = new Set<string>();
	fixed?.forEach((cells, i) => {
		for (const column of Object.keys(cells)) {
			if (!table.columns.some(({ name, formula }) => name === column && formula === null))
				fail(at('fixed', i, column), `There is no such column to fill in ${table.name}.`);
		}
		const slug = keySlug(cells[key ?? ''] ?? '');
		if (slugs.has(slug)) fail(at('fixed', i), 'Two fixed rows have the same key.');
		slugs.add(slug);
	});
}

function checkFits(
	data: WorksheetSource,
	ancestors: ReadonlyMap<string, readonly string[]>,
	fail: Fail
): void {
	data.fits.forEach((fit, i) => {
		const at = (field: string): FieldPath => ['fits', i, field];
		requireTable(data, fit.table, at('table'), fail);
		if (fit.x !== null) requireNumberColumn(data, fit.table, fit.x, at('x'), fail);
		requireNumberColumn(data, fit.table, fit.y, at('y'), fail);
		if (fit.weights !== 'equal' && fit.weights !== 'stated')
			requireNumberColumn(data, fit.table, fit.weights, at('weights'), fail);
		if (fit.per === null) return;
		requireKey(data, fit.per, at('per'), fail);
		if (!ancestors.get(fit.table)?.includes(fit.per))
			fail(at('per'), `Rows of ${fit.table} do not belong to "${fit.per}".`);
	});
}

function requireTable(data: WorksheetSource, name: string, path: FieldPath, fail: Fail): void {
	if (!data.tables.some((table) => table.name === name)) fail(path, `There is no table "${name}".`);
}

function requireKey(data: WorksheetSource, name: string, path: FieldPath, fail: Fail): void {
	const table = data.tables.find((candidate) => candidate.name === name);
	if (!table) fail(path, `There is no table "${name}".`);
	if (table?.key === null) fail(path, `The table "${name}" has no key that tells its rows apart.`);
}

/** Number columns of a table, those included that fits and results leave in its rows. */
function requireNumberColumn(
	data: WorksheetSource,
	tableName: string,
	column: string,
	path: FieldPath,
	fail: Fail
): void {
	const table = data.tables.find(({ name }) => name === tableName);
	const known =
		table?.columns.some(({ name, kind }) => name === column && kind === 'number') === true ||
		data.results.some(({ name, per }) => name === column && per === tableName) ||
		data.fits.some((fit) => fit.per === tableName && namingsOf(fit).some(({ name }) => name === column));
	if (!known) fail(path, `"${column}" is not a number column of ${tableName}.`);
}
