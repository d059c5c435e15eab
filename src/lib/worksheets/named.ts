import type { Quantity } from '$lib/quantities';
import { keySlug } from './relations';
import { textOf, type RowState } from './rows';
import type { Session } from './session';
import { singleThings, thingsByRow } from './naming';
import type { Naming, Worksheet } from './types';

/** The text that tells a row apart: its key, or its number where it has none. */
export function keyOf(worksheet: Worksheet, row: RowState): string {
	const key = worksheet.tables.find(({ name }) => name === row.table)?.key;
	const text = key == null ? '' : textOf(row.row.cells, key).trim();
	return text === '' ? String(row.number) : text;
}

/** A value by name, for one row where it has one for each. */
export interface NamedValue {
	/** 'H_vap', 'gamma.argon' */
	name: string;
	/** key of the row */
	group: string | null;
	row: RowState | null;
	naming: Naming;
	quantity: Quantity;
}

/** Names of the rows of a table in links: slugs of their keys, made different where two would be the same. */
export function rowSlugs(session: Session, table: string): Map<RowState, string> {
	const slugs = new Map<RowState, string>();
	const taken = new Set<string>();
	for (const row of session.rows.tables.get(table) ?? []) {
		if (row.blank) continue;
		const plain = keySlug(keyOf(session.worksheet, row));
		let slug = plain;
		for (let n = 2; taken.has(slug); n += 1) slug = `${plain}-${n}`;
		taken.add(slug);
		slugs.set(row, slug);
	}
	return slugs;
}

/** Every value that has a name, in the experiment's order. */
export function namedValues(session: Session): NamedValue[] {
	const values: NamedValue[] = [];
	const { worksheet } = session;
	for (const naming of singleThings(worksheet)) {
		const quantity = session.names.get(naming.name);
		if (quantity) values.push({ name: naming.name, group: null, row: null, naming, quantity });
	}
	const slugs = new Map<string, Map<RowState, string>>();
	for (const naming of thingsByRow(worksheet)) {
		let ofTable = slugs.get(naming.per);
		if (!ofTable) slugs.set(naming.per, (ofTable = rowSlugs(session, naming.per)));
		for (const [row, slug] of ofTable) {
			const quantity = row.values.get(naming.name);
			if (!quantity) continue;
			values.push({ name: `${naming.name}.${slug}`, group: keyOf(worksheet, row), row, naming, quantity });
		}
	}
	return values;
}

/** How a value for one row is called and written. */
export function namingFor({ name, naming, group }: NamedValue): Naming {
	if (group === null) return { ...naming, name };
	const text = group.replace(/[\\{}$&#^_%~]/g, ' ');
	return { ...naming, name, label: `${naming.label}, ${group}`, symbol: `${naming.symbol}(\\text{${text}})` };
}
