import {
	compatibleUnits,
	nameDimension,
	nameDimensionWithArticle,
	parseUnit,
	QuantityProblem,
	unitText,
	type Unit
} from '$lib/quantities';
import type { ColumnDefinition, Problem } from './types';

export interface HeaderField {
	header: string;
	/** null: not taken, `problem` or `note` says why */
	column: ColumnDefinition | null;
	/** the file's own unit where it has to be converted */
	convertFrom: Unit | null;
	unit: string | null;
	note: string | null;
	problem: Problem | null;
}

/** Reads headers such as 'p', 'p / torr', 't (degC)', 'Pressure [kPa]'. Whatever is not taken says why. */
export function readHeader(fields: readonly string[], columns: readonly ColumnDefinition[]): HeaderField[] {
	const taken = new Set<string>();
	return fields.map((header) => {
		const { name, unit } = splitHeader(header, columns);
		const column = findColumn(name, columns);
		const field = column ? matched(header, column, unit) : unknown(header, columns);
		if (!field.column) return field;
		if (taken.has(field.column.name)) {
			const message = `The column "${header.trim()}" stands twice. The second was not taken.`;
			return {
				...field,
				column: null,
				note: message,
				problem: { severity: 'warning', code: 'column-twice', message, column: field.column.name }
			};
		}
		taken.add(field.column.name);
		return field;
	});
}

/** Whether a first record is a header: it names a known column, or holds words and no number at all. */
export function looksLikeHeader(fields: readonly string[], columns: readonly ColumnDefinition[]): boolean {
	if (fields.some((field) => findColumn(splitHeader(field, columns).name, columns))) return true;
	return (
		fields.some((field) => field.trim() !== '') &&
		fields.every((field) => !/\d/.test(field.replace(/\(.*\)|\[.*\]/g, '')))
	);
}

function splitHeader(
	header: string,
	columns: readonly ColumnDefinition[]
): { name: string; unit: string | null } {
	const text = header.trim();
	if (findColumn(text, columns)) return { name: text, unit: null };
	const parts = /^(.*?)\s*(?:\/\s*(.+)|\(\s*(.+?)\s*\)|\[\s*(.+?)\s*\]|\s+in\s+(.+))$/.exec(text);
	if (!parts) return { name: text, unit: null };
	return {
		name: parts[1] ?? text,
		unit: (parts[2] ?? parts[3] ?? parts[4] ?? parts[5] ?? '').replace(/^\((.*)\)$/, '$1')
	};
}

/** By name as it stands, else by name or label whatever the case, if that leaves one only. */
function findColumn(name: string, columns: readonly ColumnDefinition[]): ColumnDefinition | undefined {
	const exact = columns.find((column) => column.name === name);
	if (exact) return exact;
	const lower = name.toLowerCase();
	const alike = columns.filter(
		(column) => column.name.toLowerCase() === lower || column.label.toLowerCase() === lower
	);
	return alike.length === 1 ? alike[0] : undefined;
}

function unknown(header: string, columns: readonly ColumnDefinition[]): HeaderField {
	const names = columns.filter((column) => column.formula === null).map((column) => column.name);
	const message = `The column "${header.trim()}" is not in this table, so it was not taken. The columns are ${names.join(', ')}.`;
	const blank = header.trim() === '';
	return {
		header,
		column: null,
		convertFrom: null,
		unit: null,
		note: blank ? 'A column without a name was not taken.' : message,
		problem: {
			severity: 'warning',
			code: 'unknown-column',
			message: blank ? 'A column without a name was not taken.' : message
		}
	};
}

function matched(header: string, column: ColumnDefinition, unit: string | null): HeaderField {
	const field: HeaderField = { header, column, convertFrom: null, unit: null, note: null, problem: null };
	if (column.formula !== null) {
		const message = `${column.name} is computed here; the values of "${header.trim()}" were not taken.`;
		return {
			...field,
			column: null,
			note: message,
			problem: { severity: 'note', code: 'computed-column', message, column: column.name }
		};
	}
	if (unit === null || unit === '' || column.kind !== 'number') return field;
	const wanted = parseUnit(column.unit);
	const refuse = (message: string): HeaderField => ({
		...field,
		column: null,
		unit,
		note: message,
		problem: { severity: 'error', code: 'header-unit', message, column: column.name }
	});
	try {
		const given = parseUnit(unit);
		if (!compatibleUnits(given, wanted)) {
			return refuse(
				`${column.name}: ${capitalise(nameDimension(wanted.dimension))} wanted; "${unit}" is ${nameDimensionWithArticle(given.dimension)}. The column was not taken.`
			);
		}
		if (given.factor === wanted.factor && given.offset === wanted.offset) return { ...field, unit };
		const message = `${column.name}: converted from ${unitText(given)} to ${unitText(wanted)}.`;
		return {
			...field,
			unit,
			convertFrom: given,
			note: message,
			problem: { severity: 'note', code: 'converted', message, column: column.name }
		};
	} catch (cause) {
		if (!(cause instanceof QuantityProblem)) throw cause;
		return refuse(`${column.name}: ${cause.message} The column was not taken.`);
	}
}

function capitalise(words: string): string {
	return words.charAt(0).toUpperCase() + words.slice(1);
}
