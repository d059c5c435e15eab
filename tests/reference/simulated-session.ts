import { readFileSync } from 'node:fs';
import { combinedUncertainty, coverageFactor, type Quantity } from '$lib/quantities';
import type { Readings, Worksheet } from '$lib/worksheets';
import { readTemplate } from '$lib/worksheets/authoring';
import { namedValues } from '../../src/lib/worksheets/named';
import { Session as WorkedSession } from '../../src/lib/worksheets/session';
import { withMistake } from '../../src/lib/worksheets/variant';

export interface Session {
	parameters: Record<string, string>;
	tables: Record<string, Record<string, string>[]>;
}

const folder = (slug: string) => new URL(`../../templates/${slug}/`, import.meta.url);

/** As a page gets it: through JSON. */
export function worksheetOf(slug: string): Worksheet {
	const text = (name: string) => readFileSync(new URL(name, folder(slug)), 'utf8');
	const files = { 'template.yaml': text('template.yaml'), 'guide.md': text('guide.md') };
	return JSON.parse(JSON.stringify(readTemplate(files, `templates/${slug}`))) as Worksheet;
}

/** What simulate.mjs gives, as the bench stores it. */
export function readingsOf({ parameters, tables }: Session): Readings {
	const rows = Object.entries(tables).map(([name, cells]) => [
		name,
		cells.map((row, i) => ({ id: `${name}-${i + 1}`, status: 'used' as const, cells: { ...row } }))
	]);
	return { parameters: { ...parameters }, tables: Object.fromEntries(rows) as Readings['tables'] };
}

/** The worksheet as somebody works it who makes the mistake. */
export function mistaken(worksheet: Worksheet, code: string): Worksheet {
	const mistake = worksheet.mistakes.find((candidate) => candidate.code === code);
	if (!mistake) throw new Error(`There is no mistake ${code}.`);
	return withMistake(worksheet, mistake);
}

/** Everything that somebody could state: named values and the computed cells of each row, by name. */
export function statedValues(worksheet: Worksheet, session: Session): Map<string, number> {
	const worked = new WorkedSession(worksheet);
	worked.take(readingsOf(session));
	const values = new Map(namedValues(worked).map(({ name, quantity }) => [name, quantity.value]));
	for (const { name, columns } of worksheet.tables) {
		for (const column of columns.filter(({ formula }) => formula !== null)) {
			for (const { row, values: cells } of worked.rows.tables.get(name) ?? []) {
				const cell = cells.get(column.name);
				if (cell) values.set(`${name} ${row.id} ${column.name}`, cell.value);
			}
		}
	}
	return values;
}

/** The text of a file beside the experiment. */
export function exampleText(slug: string, name: string): string {
	return readFileSync(new URL(`example/${name}`, folder(slug)), 'utf8');
}

/**
 * Sessions drawn for a coverage test: 10 000, or what MENISCUS_COVERAGE_DRAWS says, but no longer than a minute unless
 * that variable asks for a number. The seeds are 1, 2, 3 and so on: fixed before anybody looked.
 */
export function draws(one: (seed: number) => void): number {
	const asked = process.env['MENISCUS_COVERAGE_DRAWS'];
	const wanted = asked ? Number(asked) : 10_000;
	const end = Date.now() + 60_000;
	let drawn = 0;
	while (drawn < wanted && (asked || Date.now() < end)) one((drawn += 1));
	return drawn;
}

export interface Coverage {
	draws: number;
	/** share of sessions whose 95 % interval holds the true value, by name */
	share: Record<string, number>;
}

/** How often the 95 % interval of each name holds its truth. `simulate` draws the shared deviations anew in each session. */
export function coverage(
	worksheet: Worksheet,
	simulate: (seed: number) => Session,
	truth: Readonly<Record<string, number>>
): Coverage {
	const worked = new WorkedSession(worksheet);
	const held = new Map<string, number>();
	const drawn = draws((seed) => {
		worked.take(readingsOf(simulate(seed)));
		const found = new Map(namedValues(worked).map(({ name, quantity }) => [name, quantity]));
		for (const [name, expected] of Object.entries(truth)) {
			const quantity = found.get(name);
			if (!quantity) throw new Error(`There is no ${name} in session ${seed}.`);
			if (holds(quantity, expected)) held.set(name, (held.get(name) ?? 0) + 1);
		}
	});
	const share = Object.fromEntries(Object.keys(truth).map((name) => [name, (held.get(name) ?? 0) / drawn]));
	const told = Object.entries(share).map(([name, each]) => `${name} ${(100 * each).toFixed(2)} %`);
	console.log(`coverage of ${drawn} sessions of ${worksheet.slug}: ${told.join(', ')}`);
	return { draws: drawn, share };
}

/** `expected` in the unit that the quantity is told in. */
export function holds(quantity: Quantity, expected: number): boolean {
	const { standard, degreesOfFreedom } = combinedUncertainty(quantity);
	const off = Math.abs(quantity.value - expected * quantity.unit.factor);
	return off <= coverageFactor(0.95, degreesOfFreedom) * standard;
}

/**
 * Bounds for a share that should lie from `low` to `high`: as they are for 10 000 draws, further apart by what fewer
 * draws scatter more (two standard deviations of a share of 95 %, less those of 10 000 draws).
 */
export function bounds(low: number, high: number, drawn: number): [number, number] {
	const scatter = (n: number) => 2 * Math.sqrt((0.95 * 0.05) / n);
	const wider = Math.max(0, scatter(drawn) - scatter(10_000));
	return [low - wider, high + wider];
}
