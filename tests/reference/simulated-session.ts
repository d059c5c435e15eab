import { readFileSync } from 'node:fs';
import { combinedUncertainty, coverageFactor, type Quantity } from '$lib/quantities';
import {
	checkStated,
	compareOwn,
	evaluate,
	type Evaluation,
	type Formula,
	type Readings,
	type StatedValue,
	type Worksheet
} from '$lib/worksheets';
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

/** The code of the mistake that the team's own workings are found to make, where it writes what `code` has instead. */
export function recognisedInOwn(worksheet: Worksheet, readings: Readings, code: string): string | undefined {
	const own: Record<string, Formula> = {};
	for (const { name, formula } of [
		...worksheet.tables.flatMap(({ columns }) => columns),
		...worksheet.results
	])
		if (formula) own[name] = formula;
	const { instead } = worksheet.mistakes.find((mistake) => mistake.code === code) ?? { instead: null };
	return compareOwn(worksheet, readings, { ...own, ...instead?.formulas }).first?.mistake?.code;
}

/**
 * The code of the mistake that is recognised in a single number that `code` leads to: in the first that it changes, or in
 * the one asked for. Stated to nine digits, so that chance does not matter.
 */
export function recognisedInNumber(
	worksheet: Worksheet,
	readings: Readings,
	code: string,
	name?: string
): string | undefined {
	const right = evaluate(worksheet, readings);
	const wrong = evaluate(mistaken(worksheet, code), readings);
	const stated = name
		? { name, text: (wrong.quantities[name]?.value ?? NaN).toPrecision(9) }
		: firstChanged(worksheet, right, wrong);
	return stated ? checkStated(worksheet, readings, stated).mistake?.code : undefined;
}

function firstChanged(worksheet: Worksheet, right: Evaluation, wrong: Evaluation): StatedValue | null {
	const changed = (a: number | null | undefined, b: number | null | undefined): b is number =>
		typeof a === 'number' && typeof b === 'number' && Math.abs(b - a) > 1e-6 * Math.abs(a);
	for (const step of worksheet.order) {
		if (step.kind === 'fit') continue;
		if (step.kind === 'result') {
			const value = wrong.quantities[step.name]?.value;
			if (changed(right.quantities[step.name]?.value, value))
				return { name: step.name, text: value.toPrecision(9) };
			continue;
		}
		for (const [i, row] of (wrong.tables[step.table]?.rows ?? []).entries()) {
			const value = row.cells[step.column]?.value;
			if (changed(right.tables[step.table]?.rows[i]?.cells[step.column]?.value, value))
				return { name: step.column, row: row.id, text: value.toPrecision(9) };
		}
	}
	return null;
}

/** For each mistake, all that it changes in one session, as a text. @throws where one changes nothing */
export function tracesOfMistakes(worksheet: Worksheet, session: Session): string[] {
	const right = statedValues(worksheet, session);
	return worksheet.mistakes.map(({ code }) => {
		const wrong = statedValues(mistaken(worksheet, code), session);
		const changed = [...right].filter(([name, each]) => Math.abs((wrong.get(name) ?? NaN) / each - 1) > 1e-6);
		if (changed.length === 0) throw new Error(`The mistake ${code} changes nothing.`);
		return changed.map(([name]) => `${name} ${wrong.get(name)?.toPrecision(6)}`).join('; ');
	});
}

/** The text of a file beside the experiment. */
export function exampleText(slug: string, name: string): string {
	return readFileSync(new URL(`example/${name}`, folder(slug)), 'utf8');
}

/**
 * Sessions drawn for a coverage test: 10 000, or what MENISCUS_COVERAGE_DRAWS says, but no longer than half a minute unless
 * that variable asks for a number. The seeds are 1, 2, 3 and so on: fixed before anybody looked.
 */
export function draws(one: (seed: number) => void): number {
	const asked = process.env['MENISCUS_COVERAGE_DRAWS'];
	const wanted = asked ? Number(asked) : 10_000;
	const end = Date.now() + 30_000;
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
 * draws scatter more (three standard deviations of a share of 95 %, less those of 10 000 draws), since how many there are
 * depends on the computer.
 */
export function bounds(low: number, high: number, drawn: number): [number, number] {
	const scatter = (n: number) => 3 * Math.sqrt((0.95 * 0.05) / n);
	const wider = Math.max(0, scatter(drawn) - scatter(10_000));
	return [low - wider, high + wider];
}
