import { readFileSync } from 'node:fs';
import type { Readings, Worksheet } from '$lib/worksheets';
import { readTemplate } from '$lib/worksheets/authoring';

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

/** The text of a file beside the experiment. */
export function exampleText(slug: string, name: string): string {
	return readFileSync(new URL(`example/${name}`, folder(slug)), 'utf8');
}

/**
 * Draws for a coverage test: 10 000, or what MENISCUS_COVERAGE_DRAWS says, but no longer than a minute unless that
 * variable asks for a number. The seeds are 1, 2, 3 and so on. Returns how many were drawn.
 */
export function draw(one: (seed: number) => void): number {
	const asked = process.env['MENISCUS_COVERAGE_DRAWS'];
	const wanted = asked ? Number(asked) : 10_000;
	const end = Date.now() + 60_000;
	let drawn = 0;
	while (drawn < wanted && (asked || Date.now() < end)) one((drawn += 1));
	return drawn;
}

/**
 * Bounds for a share that should lie from `low` to `high`: as they are for 10 000 draws, further apart by what fewer
 * draws scatter more (two standard deviations of a share of 95 %, less those of 10 000 draws).
 */
export function bounds(low: number, high: number, draws: number): [number, number] {
	const scatter = (n: number) => 2 * Math.sqrt((0.95 * 0.05) / n);
	const wider = Math.max(0, scatter(draws) - scatter(10_000));
	return [low - wider, high + wider];
}
