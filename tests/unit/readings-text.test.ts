import { describe, expect, it } from 'vitest';
import {
	counted,
	differences,
	isBlock,
	pastedCells,
	readInWords,
	statusOf,
	type Status
} from '../../src/lib/state/readings-text';
import type { Readings, Worksheet } from '../../src/lib/worksheets';

describe('a pasted block', () => {
	it('is more than one cell', () => {
		expect(['756.2', '756.2\n', ' 1 ', ''].map(isBlock)).toEqual([false, false, false, false]);
		expect(['1\t2', '1\n2', '1\r\n2\r\n'].map(isBlock)).toEqual([true, true, true]);
	});

	it.each([
		[
			'1\t2\r\n3\t4\r\n',
			[
				['1', '2'],
				['3', '4']
			]
		],
		['1\n\n3\n', [['1'], [], ['3']]],
		['\n2', [[], ['2']]],
		['a\t"x ""y"" z"\tb', [['a', 'x "y" z', 'b']]],
		[
			'"two\nlines"\tb\nc\td',
			[
				['two\nlines', 'b'],
				['c', 'd']
			]
		],
		['\uFEFF1\t2', [['1', '2']]],
		['1\t\t3', [['1', '', '3']]]
	])('%j', (text, cells) => expect(pastedCells(text)).toEqual(cells));
});

describe('the line at the foot', () => {
	const line = (
		live: Partial<Parameters<typeof statusOf>[0]>,
		here = 0,
		cameBack = 0,
		closed: 'frozen' | 'sealed' | null = null
	): Status => statusOf({ state: 'stored', refusal: null, storedAt: null, ...live }, here, cameBack, closed);

	it('says what is so', () => {
		const at = new Date(2026, 11, 1, 14, 32);
		expect(line({ storedAt: at }).text).toBe('Stored 14:32.');
		expect(line({ state: 'storing' }, 1).text).toBe('Storing…');
		expect(line({ state: 'offline' }, 1).text).toBe('Offline. 1 reading is on this device only.');
		expect(line({ state: 'offline' }, 3).text).toBe('Offline. 3 readings are on this device only.');
		expect(line({ storedAt: at }, 0, 3).text).toBe('Online again. All 3 readings stored.');
		expect(line({ storedAt: at }, 0, 1).text).toBe('Online again. The reading is stored.');
		expect(line({ state: 'read-only' }, 0, 0, 'frozen').text).toContain('the time for this work is over');
		expect(line({ state: 'refused', refusal: 'signed-out' }).state).toBe('stopped');
	});

	it('never says stored while it is not', () => {
		for (const state of ['connecting', 'storing', 'offline', 'refused', 'read-only'] as const)
			expect(line({ state }, 2).text).not.toMatch(/^Stored/);
	});
});

describe('what was typed here and not taken', () => {
	const worksheet = {
		parameters: [{ name: 'p_b', label: 'Barometric pressure' }],
		tables: [{ name: 'readings', columns: [{ name: 't' }, { name: 'p' }] }]
	} as unknown as Worksheet;
	const readings = (p_b: string, rows: [string, Record<string, string>][]): Readings => ({
		parameters: p_b === '' ? {} : { p_b },
		tables: { readings: rows.map(([id, cells]) => ({ id, cells, status: 'used' })) }
	});

	it('is named cell by cell, as people say it', () => {
		const here = readings('756.2', [
			['a', { t: '82.93', p: '400.0' }],
			['b', { t: '85.35', p: '441' }],
			['c', { t: '87.59' }]
		]);
		const stored = readings('', [
			['a', { t: '82.93', p: '400.0' }],
			['b', { t: '85.35', p: '440' }]
		]);
		expect(
			differences(worksheet, here, stored).map(({ where, here: mine, stored: theirs }) => [
				where,
				mine,
				theirs
			])
		).toEqual([
			['Barometric pressure', '756.2', ''],
			['Row 2, p', '441', '440'],
			['Row 3, t', '87.59', '']
		]);
	});

	it('is nothing when the same stands there', () => {
		const same = readings('756.2', [['a', { t: '1' }]]);
		expect(differences(worksheet, same, same)).toEqual([]);
	});
});

describe('counts in words', () => {
	it.each([
		[counted(1, 'row'), '1 row'],
		[counted(2000, 'row'), '2,000 rows'],
		[readInWords(12, 1), '12 rows read, 1 cell is not a number: kept as typed.'],
		[readInWords(1, 0), '1 row read, every number understood.'],
		[readInWords(3, 2), '3 rows read, 2 cells are not numbers: kept as typed.']
	])('%s', (text, wanted) => expect(text).toBe(wanted));
});
