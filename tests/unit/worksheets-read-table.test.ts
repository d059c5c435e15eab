import { readdirSync, readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { evaluate, readTable } from '$lib/worksheets';
import { splitDelimited } from '../../src/lib/worksheets/delimited';
import { exampleCsv, readingsOf, water } from './worksheets-fixture';

const columns = water.tables[0]?.columns ?? [];
const read = (text: string) => readTable(text, columns);
const cells = (text: string) => read(text).rows.map((row) => [row.cells['t'], row.cells['p']]);
const problems = (text: string) => read(text).problems.map(({ message }) => message);

describe('reading a table', () => {
	it('reads the example without a problem, and it works up', () => {
		const table = read(exampleCsv);
		expect(table.problems).toEqual([]);
		expect(table.rows).toHaveLength(10);
		const evaluation = evaluate(
			water,
			readingsOf(table.rows.map((row, i) => ({ id: String(i), status: 'used', ...row })))
		);
		expect(evaluation.problems).toEqual([]);
	});

	const expected = [
		['82.93', '400.0'],
		['85.35', '440.0']
	];
	it.each([
		['comma', 't,p\n82.93,400.0\n85.35,440.0\n'],
		['semicolon', 't;p\r\n82.93;400.0\r\n85.35;440.0'],
		['tab, as pasted', 't\tp\n82.93\t400.0\n85.35\t440.0'],
		['old line ends', 't,p\r82.93,400.0\r85.35,440.0\r'],
		['byte-order mark', '\uFEFFt,p\n82.93,400.0\n85.35,440.0'],
		['quotes', '"t","p"\n"82.93","400.0"\n"85.35","440.0"'],
		['other order and unit in the header', 'p / torr,t / °C\n400.0,82.93\n440.0,85.35'],
		['units in parentheses', 't (degC),p (Torr)\n82.93,400.0\n85.35,440.0'],
		['units in brackets and labels', 'Boiling temperature [°C];Pressure [torr]\n82.93;400.0\n85.35;440.0'],
		['blank lines', '\nt,p\n\n82.93,400.0\n,\n85.35,440.0\n\n']
	])('reads %s', (_, text) => {
		expect(cells(text)).toEqual(expected);
		expect(problems(text)).toEqual([]);
	});

	it('keeps a decimal comma as typed', () => {
		expect(cells('t;p\n82,93;400,0')).toEqual([['82,93', '400,0']]);
		expect(cells('t\n82,93\n85,35')).toEqual([
			['82,93', ''],
			['85,35', '']
		]);
	});

	it('takes columns in order without a header, and says so', () => {
		expect(cells('82.93\t400.0\n85.35\t440.0')).toEqual(expected);
		expect(problems('82.93\t400.0')).toEqual([
			'No header, so the columns are taken in order: t in °C, p in torr.'
		]);
		expect(problems('82,93\n85,35').join()).toContain('If that comma is a decimal sign');
	});

	it('converts another unit, or refuses it in words', () => {
		const table = read('t / K,p / kPa\n356.08,53.3\n358.50,58.7');
		expect(table.rows.map((row) => [row.cells['t'], row.cells['p']])).toEqual([
			['82.93', '399.783'],
			['85.35', '440.286']
		]);
		expect(table.problems.map(({ message }) => message)).toEqual([
			't: converted from K to °C.',
			'p: converted from kPa to torr.'
		]);
		expect(problems('t / s,p\n1,2')).toContain(
			't: Temperature wanted; "s" is a time. The column was not taken.'
		);
		expect(problems('t / furlong,p\n1,2').join()).toContain(
			'"furlong" is not a unit known here. The column was not taken.'
		);
		expect(read('p / kPa\n53.3(2)').rows[0]?.cells['p']).toBe('53.3(2) kPa');
	});

	it('keeps a bad cell and the good rows', () => {
		const text = 't,p\n82.93,400.0\n"75,6o",440.0\n87.59,480.0';
		expect(cells(text)[1]).toEqual(['75,6o', '440.0']);
		expect(cells(text)).toHaveLength(3);
		expect(read(text).problems).toEqual([
			{
				severity: 'error',
				code: 'not-a-number',
				message: 'Row 2, t: "75,6o" is not a number. Kept as typed.',
				row: '2',
				column: 't'
			}
		]);
	});

	it('says what it does not take', () => {
		expect(problems('t,p,humidity\n1,2,3')).toEqual([
			'The column "humidity" is not in this table, so it was not taken. The columns are t, p, note.'
		]);
		expect(problems('t,p,T\n1,2,3')).toEqual(['T is computed here; the values of "T" were not taken.']);
		expect(problems('t,p,t\n1,2,3')).toEqual(['The column "t" stands twice. The second was not taken.']);
		expect(problems('t,p\n1,2,3')).toEqual([
			'Row 1 (line 2) has more cells than there are columns. Not taken: "3".'
		]);
		expect(problems('t,p\n"1,2').join()).toContain('Line 2: a quotation mark is opened and never closed.');
		expect(problems('')).toEqual(['No rows in it.']);
	});

	it('refuses more than 50,000 rows and says how many there are', { timeout: 30_000 }, () => {
		const table = read('t,p\n' + '82.93,400\n'.repeat(50_001));
		expect(table.rows).toEqual([]);
		expect(table.rowCount).toBe(50_001);
		expect(table.problems[0]?.message).toContain('50,001 rows, and a table takes 50,000. Nothing was taken');
		expect(read('t,p\n' + '82.93,400\n'.repeat(50_000)).rows).toHaveLength(50_000);
	});

	it('never throws and loses no row', { timeout: 30_000 }, () => {
		const text = fc.string({ unit: fc.constantFrom(...'tp0123456789.,;\t"\n\r /()°CK'), maxLength: 60 });
		fc.assert(
			fc.property(text, (value) => {
				const table = read(value);
				expect(table.rows).toHaveLength(table.rowCount);
				for (const row of table.rows) expect(Object.keys(row.cells)).toEqual(['t', 'p', 'note']);
			}),
			{ numRuns: 3000, seed: 310 }
		);
	});

	it('takes back what it wrote, quotes and delimiters included', () => {
		const field = fc.string({ unit: fc.constantFrom(...'ab",;\n\r '), maxLength: 6 });
		const table = fc.array(fc.array(field, { minLength: 2, maxLength: 4 }), { minLength: 1, maxLength: 5 });
		fc.assert(
			fc.property(table, (rows) => {
				const text = rows
					.map((fields) => fields.map((each) => `"${each.replaceAll('"', '""')}"`).join(','))
					.join('\r\n');
				expect(splitDelimited(text, ',').records.map(({ fields }) => fields)).toEqual(rows);
			}),
			{ seed: 310 }
		);
	});
});

describe('csv-spectrum', () => {
	const folder = join(dirname(createRequire(import.meta.url).resolve('csv-spectrum')), 'csvs');
	// the package's JSON beside location_coordinates.csv holds another telephone number than the CSV
	const names = readdirSync(folder).filter(
		(name) => name.endsWith('.csv') && !name.startsWith('location_coordinates')
	);

	it.each(names)('%s', (name) => {
		const { records } = splitDelimited(readFileSync(join(folder, name), 'utf8'), ',');
		const [header, ...rows] = records.map(({ fields }) => fields);
		const objects = rows.map((fields) =>
			Object.fromEntries((header ?? []).map((key, i) => [key, fields[i] ?? '']))
		);
		const wanted: unknown = JSON.parse(
			readFileSync(join(folder, '..', 'json', name.replace('.csv', '.json')), 'utf8')
		);
		expect(objects).toEqual(wanted);
	});
});
