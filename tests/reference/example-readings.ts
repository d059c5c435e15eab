import { readTable, type ReadingRow, type Readings, type Worksheet } from '$lib/worksheets';
import { exampleText } from './simulated-session';

/** The four experiments of the course, by folder. */
export const experiments = [
	'heat-capacity-ratio',
	'combustion',
	'vaporization-of-water',
	'mutarotation'
] as const;

/** The example readings of its folder. */
export function exampleOf(slug: string, worksheet: Worksheet): Readings {
	const text = (name: string) => exampleText(slug, name);
	const tables: Record<string, ReadingRow[]> = {};
	for (const { name, fixed, columns } of worksheet.tables) {
		if (fixed) continue;
		tables[name] = readTable(text(`${name}.csv`), columns).rows.map(({ cells }, i) => ({
			id: `${name}-${i + 1}`,
			cells,
			status: 'used'
		}));
	}
	return { parameters: JSON.parse(text('parameters.json')) as Record<string, string>, tables };
}
