import type { TableDefinition } from './types';

type Related = Pick<TableDefinition, 'name'> & { columns: readonly { of: string | null }[] };

/** The tables that each table's rows belong to, nearest first; or the tables whose rows belong to each other in a circle. */
export function ancestorsOf(tables: readonly Related[]): Map<string, string[]> | { cycle: string[] } {
	const ancestors = new Map<string, string[]>();
	for (const table of tables) {
		const found: string[] = [];
		let layer = parentsOf(table);
		while (layer.length > 0) {
			if (layer.includes(table.name)) return { cycle: [table.name, ...found] };
			found.push(...layer.filter((name) => !found.includes(name)));
			const next = tables.filter(({ name }) => layer.includes(name)).flatMap(parentsOf);
			layer = next.filter((name) => !found.includes(name));
		}
		ancestors.set(table.name, found);
	}
	return ancestors;
}

function parentsOf({ columns }: Related): string[] {
	return columns.flatMap(({ of }) => of ?? []);
}

/** What stands in addresses and links for a row's key: small letters, digits and hyphens. */
export function keySlug(key: string): string {
	const slug = key
		.toLowerCase()
		.replace(/[^a-z0-9]+/g, '-')
		.replace(/^-|-$/g, '');
	return slug === '' ? 'row' : slug;
}
