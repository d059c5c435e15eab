import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { laneOf, placeOf, readReport, anchorOf } from '../../src/lib/components/marking/sheet-data';
import { evaluate, readTable, type Readings } from '../../src/lib/worksheets';
import { readTemplate } from '../../src/lib/worksheets/authoring';

const folder = new URL('../../templates/vaporization-of-water/', import.meta.url);
const file = (name: string) => readFileSync(new URL(name, folder), 'utf8');
const worksheet = readTemplate(
	{ 'template.yaml': file('template.yaml'), 'guide.md': file('guide.md') },
	'template'
);
const table = worksheet.tables[0];
if (!table) throw new Error('the experiment has no table');
const read = readTable(file('example/readings.csv'), table.columns);
const readings: Readings = {
	parameters: {},
	tables: {
		[table.name]: read.rows.map(({ cells }, index) => ({ id: String(index), cells, status: 'used' }))
	}
};
const evaluation = evaluate(worksheet, readings);
const section = (text: string, position = 1) => ({
	position,
	key: 'results',
	title: 'Results',
	owner: 'team' as const,
	text
});

describe('the figures lane', () => {
	it('has a line for each stated value: agreement, and departure in u without the unit', () => {
		const boiling = evaluation.quantities['T_b'];
		if (!boiling?.standardUncertainty) throw new Error('the example has no boiling point');
		const off = (boiling.value + 4 * boiling.standardUncertainty).toFixed(1);
		const lane = laneOf([section(`It is :value[H_vap].\n\nWater boils at ${off} K.`)], evaluation);
		expect(lane.map(({ block, agrees }) => [block, agrees])).toEqual([
			['1.1', true],
			['1.2', false]
		]);
		const departing = lane[1];
		const u = (Number(off) - boiling.value) / boiling.standardUncertainty;
		const [value, multiple] = (departing?.departureText ?? '').split(',\u00a0');
		expect(boiling.display.text.startsWith(value ?? '?')).toBe(true);
		expect(value).not.toContain('K');
		expect(Number(multiple?.replace('\u00a0u', ''))).toBeCloseTo(u, 1);
		expect(departing?.sentence).toContain(`Stated ${off}`);
	});
});

describe('the words of a remark', () => {
	const report = readReport(
		[section('We waited one minute. The bath drifted.'), section('It is :value[H_vap].', 2)],
		evaluation
	);

	it('are found where they were selected, links included', () => {
		const anchor = anchorOf({ section: 1, start: 3, end: 20 }, report);
		expect(anchor?.selectors[0]).toMatchObject({ type: 'TextQuoteSelector', exact: 'waited one minute' });
		expect(placeOf(anchor, report)).toEqual({ block: '1.1', start: 3, end: 20, lost: false });
		const linked = anchorOf({ section: 2, start: 6, end: 7 }, report);
		expect(linked?.links).toEqual(['H_vap']);
		expect(placeOf(linked, report)).toMatchObject({ block: '2.1', start: 6, end: 7, lost: false });
	});

	it('are said to be lost when they are not there', () => {
		const anchor = anchorOf({ section: 1, start: 3, end: 20 }, report);
		const other = readReport([section('Nothing of that sort stands here.')], evaluation);
		expect(placeOf(anchor, other)).toMatchObject({ block: '1.1', lost: true });
	});
});
