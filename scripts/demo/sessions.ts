import { readFile } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import { v7 as uuidv7 } from 'uuid';
import { simulate as combustion } from '../../templates/combustion/simulate.mjs';
import { simulate as heatCapacityRatio } from '../../templates/heat-capacity-ratio/simulate.mjs';
import { simulate as mutarotation } from '../../templates/mutarotation/simulate.mjs';
import { readTable, type Readings, type Worksheet } from '../../src/lib/worksheets';

/** What a template's script gives: texts as typed. */
interface Simulated {
	parameters: Record<string, string>;
	tables: Record<string, Record<string, string>[]>;
}

export const rotating = ['heat-capacity-ratio', 'combustion', 'mutarotation'] as const;
export type Rotating = (typeof rotating)[number];

const simulations: Record<Rotating, (seed: number) => Simulated> = {
	'heat-capacity-ratio': heatCapacityRatio,
	combustion,
	mutarotation
};

export const templateFolder = (slug: string) =>
	fileURLToPath(new URL(`../../templates/${slug}`, import.meta.url));

/** A session of its own for each seed. */
export function simulatedSession(slug: Rotating, seed: number): Readings {
	const { parameters, tables } = simulations[slug](seed);
	return readings(parameters, tables);
}

/** The readings that lie beside the experiment. */
export async function exampleSession(slug: Rotating, worksheet: Worksheet): Promise<Readings> {
	const text = (name: string) => readFile(`${templateFolder(slug)}/example/${name}`, 'utf8');
	const tables: Simulated['tables'] = {};
	for (const table of worksheet.tables) {
		if (table.fixed) continue;
		tables[table.name] = readTable(await text(`${table.name}.csv`), table.columns).rows.map(
			({ cells }) => cells
		);
	}
	return readings(JSON.parse(await text('parameters.json')) as Record<string, string>, tables);
}

function readings(parameters: Simulated['parameters'], tables: Simulated['tables']): Readings {
	const rows = Object.entries(tables).map(([name, cells]) => [
		name,
		cells.map((row) => ({ id: uuidv7(), status: 'used' as const, cells: row }))
	]);
	return { parameters, tables: Object.fromEntries(rows) as Readings['tables'] };
}
