import type { ColumnDefinition, Naming, Worksheet } from './types';

/** Everything with a single value: constants, parameters, fits' parameters, results. */
export function singleThings(worksheet: Worksheet): Naming[] {
	return [
		...worksheet.constants,
		...worksheet.parameters.filter(({ kind }) => kind === 'number'),
		...worksheet.fits.filter(({ per }) => per === null).flatMap(({ parameters }) => parameters),
		...worksheet.results.filter(({ per }) => per === null)
	];
}

/** What is told by name for each row of a table: fits' parameters and results. */
export function thingsByRow(worksheet: Worksheet): (Naming & { per: string })[] {
	const things = [
		...worksheet.fits.flatMap((fit) => fit.parameters.map((naming) => ({ ...naming, per: fit.per }))),
		...worksheet.results
	];
	return things.flatMap((thing) => (thing.per === null ? [] : [{ ...thing, per: thing.per }]));
}

/** The naming of any name: single things, things by row, and columns. */
export function namingOf(worksheet: Worksheet, name: string): Naming | undefined {
	return (
		singleThings(worksheet).find((thing) => thing.name === name) ??
		worksheet.parameters.find((parameter) => parameter.name === name) ??
		worksheet.tables.flatMap(({ columns }) => columns).find((column) => column.name === name)
	);
}

/** As it stands inside a sentence. */
export function labelOf(worksheet: Worksheet, name: string): string {
	const label = namingOf(worksheet, name)?.label ?? name;
	return label.charAt(0).toLowerCase() + label.slice(1);
}

export function findColumn(worksheet: Worksheet, table: string, name: string): ColumnDefinition | undefined {
	return worksheet.tables
		.find((candidate) => candidate.name === table)
		?.columns.find((column) => column.name === name);
}
