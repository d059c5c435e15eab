import { readFileSync } from 'node:fs';
import { readTable, type Readings, type Worksheet } from '$lib/worksheets';
import { readTemplate } from '$lib/worksheets/authoring';

const folder = new URL('../../templates/vaporization-of-water/', import.meta.url);
const text = (name: string) => readFileSync(new URL(name, folder), 'utf8');

/** As a page gets it: through JSON. */
export const water = JSON.parse(
	JSON.stringify(
		readTemplate(
			{ 'template.yaml': text('template.yaml'), 'guide.md': text('guide.md') },
			'vaporization-of-water'
		)
	)
) as Worksheet;

/** Text of a file or a paste to readings, as the bench does it. */
export function readingsFrom(csv: string): Readings {
	const table = readTable(csv, water.tables[0]?.columns ?? []);
	const rows = table.rows.map((row, i) => ({ id: `row-${i + 1}`, status: 'used' as const, ...row }));
	return { parameters: { p_b: '760.0' }, tables: { readings: rows } };
}
