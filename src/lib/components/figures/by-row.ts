import type {
	Evaluation,
	ShownColumn,
	ShownComparison,
	ShownFit,
	ShownQuantity,
	ShownTable
} from '$lib/worksheets';

/** The key in a name: '.argon' of 'gamma.argon'. */
export function suffixOf(name: string): string {
	const at = name.lastIndexOf('.');
	return at < 0 ? '' : name.slice(at);
}

export function baseOf(name: string): string {
	return name.slice(0, name.length - suffixOf(name).length);
}

/** The column whose texts tell a table's rows apart, as far as they can be seen: the first that holds no numbers. */
export function keyColumn(table: ShownTable): ShownColumn | undefined {
	return table.columns.find(
		({ kind, computed, name }) =>
			!computed &&
			(kind === undefined ? table.rows.every((row) => row.cells[name]?.value == null) : kind !== 'number')
	);
}

/** What a row is called: its key, else its number. */
export function rowName(table: ShownTable, id: string): string {
	const row = table.rows.find((candidate) => candidate.id === id);
	const key = keyColumn(table);
	const text = key && row ? (row.cells[key.name]?.text ?? '').trim() : '';
	return text === '' ? String(row?.number ?? '') : text;
}

/** The cells of a computed column as texts without their unit, by the key of their row. */
function textsByKey(table: ShownTable, column: string): Map<string, string> {
	return new Map(table.rows.map((row) => [rowName(table, row.id), row.cells[column]?.text ?? '']));
}

export interface ByRow {
	/** what the keys are of: 'Gas' */
	head: string;
	columns: ShownColumn[];
	/** texts without unit, in the order of the columns; '' where a row has none */
	rows: { key: string; texts: string[] }[];
}

function byRow(table: ShownTable, columns: ShownColumn[]): ByRow {
	const texts = columns.map(({ name }) => textsByKey(table, name));
	const rows = table.rows.map(({ id }) => rowName(table, id));
	return {
		head: keyColumn(table)?.label ?? 'Row',
		columns,
		rows: rows
			.map((key) => ({ key, texts: texts.map((column) => column.get(key) ?? '') }))
			.filter((row) => row.texts.some((text) => text !== ''))
	};
}

/** Results that each row of a table has, one set for each such table. What fits leave in the rows is told with the fits. */
export function resultsByRow(evaluation: Evaluation): ByRow[] {
	const fitted = fittedNames(evaluation);
	const bases = new Set(
		Object.values(evaluation.quantities).flatMap(({ name, group }) =>
			group === undefined || fitted.has(name) ? [] : [baseOf(name)]
		)
	);
	return Object.values(evaluation.tables).flatMap((table) => {
		const columns = table.columns.filter(({ name }) => bases.has(name));
		return columns.length === 0 ? [] : [byRow(table, columns)];
	});
}

/** What fits by row leave in the rows. */
export function fittedByRow(evaluation: Evaluation, set: FitSet): ByRow | null {
	const bases = set.fits[0]?.parameters.map(({ name }) => baseOf(name)) ?? [];
	const table = Object.values(evaluation.tables).find(({ columns }) =>
		columns.some(({ name }) => name === bases[0])
	);
	if (!table || set.fits[0]?.group === undefined) return null;
	return byRow(
		table,
		bases.flatMap((base) => table.columns.find(({ name }) => name === base) ?? [])
	);
}

function fittedNames({ fits }: Evaluation): Set<string> {
	return new Set(Object.values(fits).flatMap(({ parameters }) => parameters.map(({ name }) => name)));
}

/** Values that are not told by row, apart from what fits tell. */
export function singleValues(evaluation: Evaluation): ShownQuantity[] {
	const fitted = fittedNames(evaluation);
	return Object.values(evaluation.quantities).filter(
		({ group, name }) => group === undefined && !fitted.has(name)
	);
}

/** Columns of tables by row whose values are told as results or with fits: tables of readings leave them out. */
export function toldByRow(evaluation: Evaluation): Set<string> {
	return new Set(
		Object.values(evaluation.quantities).flatMap(({ name, group }) =>
			group === undefined ? [] : [baseOf(name)]
		)
	);
}

export interface FitSet {
	/** 'line' */
	name: string;
	label: string;
	/** one, or one for each row */
	fits: ShownFit[];
}

export function fitSets(evaluation: Evaluation): FitSet[] {
	const sets = new Map<string, FitSet>();
	for (const fit of Object.values(evaluation.fits)) {
		const name = fit.group === undefined ? fit.name : baseOf(fit.name);
		const set = sets.get(name) ?? { name, label: withoutGroup(fit.label, fit.group), fits: [] };
		set.fits.push(fit);
		sets.set(name, set);
	}
	return [...sets.values()];
}

/** 'Heat capacity ratio' of 'Heat capacity ratio, argon'. */
export function withoutGroup(label: string, group: string | undefined): string {
	return group !== undefined && label.endsWith(`, ${group}`) ? label.slice(0, -group.length - 2) : label;
}

/** The compared value's own label: 'Heat capacity ratio, argon'. */
export function comparedLabel(
	evaluation: Evaluation,
	key: string,
	{ quantity, group }: ShownComparison
): string {
	const name = group === undefined ? quantity : `${quantity}${suffixOf(key)}`;
	return evaluation.quantities[name]?.label ?? (group === undefined ? quantity : `${quantity}, ${group}`);
}
