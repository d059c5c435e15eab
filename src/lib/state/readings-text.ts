import { parseUnit, unitText } from '$lib/quantities';
import { splitDelimited, type Readings, type UncertaintyComponent, type Worksheet } from '$lib/worksheets';
import type { LiveRefusal, LiveState } from './live-connection';

/** Rows that one table takes while it is typed live. Larger ones are recordings. */
export const liveRowLimit = 2_000;

const number = (count: number) => count.toLocaleString('en');

/** "1 reading", "12 readings". */
export function counted(count: number, one: string, many = `${one}s`): string {
	return `${number(count)} ${count === 1 ? one : many}`;
}

/** "14:32" in the course's zone; by this device's clock where none is named. */
export function clock(at: Date, zone?: string): string {
	return at.toLocaleTimeString('en-GB', {
		hour: '2-digit',
		minute: '2-digit',
		...(zone && { timeZone: zone })
	});
}

export interface Status {
	text: string;
	state: 'kept' | 'sending' | 'waiting' | 'stopped';
}

/** The sentence at the foot of a live sheet. `here` counts the things that are on this device only; `cameBack` those stored after a loss of the connection. */
export function statusOf(
	live: { state: LiveState; refusal: LiveRefusal | null; storedAt: Date | null },
	here: number,
	cameBack: number,
	closed: 'frozen' | 'sealed' | null,
	word = 'reading',
	zone?: string
): Status {
	switch (live.state) {
		case 'connecting':
			return { text: 'Connecting…', state: 'sending' };
		case 'stored':
			if (cameBack > 0) {
				const all = cameBack === 1 ? `The ${word} is stored` : `All ${counted(cameBack, word)} stored`;
				return { text: `Online again. ${all}.`, state: 'kept' };
			}
			return { text: live.storedAt ? `Stored ${clock(live.storedAt, zone)}.` : 'Stored.', state: 'kept' };
		case 'storing':
			return { text: 'Storing…', state: 'sending' };
		case 'offline':
			return {
				text:
					here > 0
						? `Offline. ${counted(here, word)} ${here === 1 ? 'is' : 'are'} on this device only.`
						: 'Offline. What you type stays on this device until the connection is back.',
				state: 'waiting'
			};
		case 'read-only':
			return {
				text:
					closed === 'frozen'
						? 'Closed: the time for this work is over. Nothing can be changed.'
						: closed === 'sealed'
							? 'Sealed. Changes need a reason.'
							: 'You see these as they are written; only the team changes them.',
				state: 'kept'
			};
		case 'refused':
			return live.refusal === 'signed-out'
				? {
						text: 'You are signed out. Sign in again; what you typed is kept on this device.',
						state: 'stopped'
					}
				: { text: 'Not here, or not yours to see any more.', state: 'stopped' };
	}
}

/** A worksheet's unit as it is shown where there is no markup: "°C" for "degC", "kg/m³". */
export function shownUnit(unit: string): string {
	if (unit === '') return '';
	return unitText(parseUnit(unit)).replace(/\^([23])(?!\d)/g, (_, power) => (power === '2' ? '²' : '³'));
}

/** "0.1 K each reading, 0.2 K shared": the components of a standard uncertainty in few words. */
export function componentsInWords(components: readonly UncertaintyComponent[]): string {
	return components
		.map(({ size, unit, scope, distribution, acts }) => {
			const amount =
				acts === 'gain' ? `${Number((size * 100).toPrecision(6))} %` : `${size} ${shownUnit(unit)}`;
			const reach = scope === 'reading' ? 'each reading' : scope === 'run' ? 'each run' : 'shared';
			return `${distribution === 'normal' ? '' : '±'}${amount} ${reach}`;
		})
		.join(', ');
}

/** A pasted block: rows of cells, blank lines kept as rows so that nothing moves up. */
export function pastedCells(text: string): string[][] {
	const plain = text.replace(/^\uFEFF/, '').replace(/(\r\n|\r|\n)$/, '');
	const { records } = splitDelimited(plain, '\t');
	const severalLines = records.some(({ fields }) => fields.some((field) => /[\r\n]/.test(field)));
	const rows: string[][] = [];
	for (const { fields, line } of records) {
		while (!severalLines && rows.length < line - 1) rows.push([]);
		rows.push(fields.map((field) => field.trim()));
	}
	return rows;
}

/** More than one cell, as spreadsheets copy them. */
export function isBlock(text: string): boolean {
	return /[\t\n\r]/.test(text.replace(/(\r\n|\r|\n)$/, ''));
}

export interface Difference {
	/** "Row 3, p", "Barometric pressure" */
	where: string;
	here: string;
	stored: string;
	place: { parameter: string } | { table: string; row: string; column: string };
}

/** What stands here and is not stored, cell by cell, as people say it. */
export function differences(worksheet: Worksheet, here: Readings, stored: Readings): Difference[] {
	const found: Difference[] = [];
	for (const { name, label } of worksheet.parameters) {
		const [mine, theirs] = [here.parameters[name] ?? '', stored.parameters[name] ?? ''];
		if (mine !== '' && mine !== theirs)
			found.push({ where: label, here: mine, stored: theirs, place: { parameter: name } });
	}
	for (const table of worksheet.tables) {
		(here.tables[table.name] ?? []).forEach((row, index) => {
			const there = stored.tables[table.name]?.find(({ id }) => id === row.id);
			for (const column of table.columns) {
				const [mine, theirs] = [row.cells[column.name] ?? '', there?.cells[column.name] ?? ''];
				if (mine !== '' && mine !== theirs) {
					found.push({
						where: `Row ${index + 1}, ${column.name}`,
						here: mine,
						stored: theirs,
						place: { table: table.name, row: row.id, column: column.name }
					});
				}
			}
		});
	}
	return found;
}

/** "12 rows read, 1 cell is not a number: kept as typed." */
export function readInWords(rows: number, badCells: number): string {
	const read = `${counted(rows, 'row')} read`;
	if (badCells === 0) return `${read}, every number understood.`;
	return badCells === 1
		? `${read}, 1 cell is not a number: kept as typed.`
		: `${read}, ${number(badCells)} cells are not numbers: kept as typed.`;
}
