import type { Readings } from '$lib/worksheets';

/** Rows that did not change stay the same objects, so that only changed rows are drawn and worked up anew. */
export function sameRows(before: Readings, after: Readings): Readings {
	const tables: Readings['tables'] = {};
	for (const [name, rows] of Object.entries(after.tables)) {
		const known = new Map((before.tables[name] ?? []).map((row) => [row.id, row]));
		tables[name] = rows.map((row) => {
			const old = known.get(row.id);
			return old && JSON.stringify(old) === JSON.stringify(row) ? old : row;
		});
	}
	return { parameters: after.parameters, tables };
}
