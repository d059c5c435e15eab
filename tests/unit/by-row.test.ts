import { describe, expect, it } from 'vitest';
import {
	comparedLabel,
	fitSets,
	fittedByRow,
	resultsByRow,
	singleValues
} from '$lib/components/figures/by-row';
import { describePlot } from '$lib/plots';
import { evaluate, readTable, type Evaluation, type Readings } from '$lib/worksheets';
import { exampleText, worksheetOf } from '../reference/simulated-session';

function exampleOf(slug: string): Evaluation {
	const worksheet = worksheetOf(slug);
	const tables: Readings['tables'] = {};
	for (const table of worksheet.tables.filter(({ fixed }) => fixed === null)) {
		const { rows } = readTable(exampleText(slug, `${table.name}.csv`), table.columns);
		tables[table.name] = rows.map(({ cells }, i) => ({ id: `${table.name}-${i}`, cells, status: 'used' }));
	}
	const parameters = JSON.parse(exampleText(slug, 'parameters.json')) as Record<string, string>;
	return evaluate(worksheet, { parameters, tables });
}

describe('results by row', () => {
	const gases = exampleOf('heat-capacity-ratio');
	const runs = exampleOf('mutarotation');

	it('stand in one table, each under its quantity, as the cells of their rows', () => {
		const [byGas, ...others] = resultsByRow(gases);
		expect(others).toEqual([]);
		expect(byGas?.head).toBe('Gas');
		expect(byGas?.columns.map(({ name }) => name)).toEqual(['gamma', 'C_V', 'C_p']);
		expect(byGas?.rows.map(({ key }) => key)).toEqual(['argon', 'nitrogen']);
		const shown = gases.quantities['gamma.argon']?.display.text;
		expect(byGas?.rows[0]?.texts[0]).toBe(shown);
	});

	it('are kept apart from single values and from what fits leave', () => {
		expect(singleValues(runs).every(({ group }) => group === undefined)).toBe(true);
		expect(resultsByRow(runs)[0]?.columns.map(({ name }) => name)).not.toContain('b_line');
		const decline = fitSets(runs).find(({ name }) => name === 'decline');
		expect(decline?.label).toBe('First-order line');
		expect(decline?.fits.map(({ group }) => group)).toEqual(['A', 'B', 'C', 'D', 'E']);
		const values = decline && fittedByRow(runs, decline);
		expect(values?.columns.map(({ name }) => name)).toEqual(['b_line', 'a_line']);
		expect(values?.rows).toHaveLength(5);
	});

	it('are compared under their own label', () => {
		const comparison = gases.comparisons['gamma.argon'];
		expect(comparison && comparedLabel(gases, 'gamma.argon', comparison)).toBe(
			gases.quantities['gamma.argon']?.label
		);
	});
});

describe('several series', () => {
	const figure = exampleOf('mutarotation').figures['decay'];
	if (!figure) throw new Error('There is no figure.');

	it.each([328, 566])('have their names beside them, apart from each other, at %i px', (width) => {
		const { marks } = describePlot(figure, { width, height: 408 });
		const labels = marks.flatMap((mark) => (mark.kind === 'label' ? [mark] : []));
		expect(labels.map(({ text }) => text)).toEqual(['A', 'B', 'C', 'D', 'E']);
		for (const label of labels) {
			expect(label.x).toBeGreaterThan(0);
			expect(label.x + 22).toBeLessThanOrEqual(width);
			for (const other of labels)
				expect(other === label || Math.abs(other.x - label.x) > 15 || Math.abs(other.y - label.y) > 12).toBe(
					true
				);
		}
		expect(marks.filter((mark) => mark.class === 'fit')).toHaveLength(5);
		expect(new Set(marks.flatMap((mark) => (mark.kind === 'point' ? [mark.series] : []))).size).toBe(5);
	});

	it('with one alone have no names, and edges to the band', () => {
		const [first] = figure.series;
		const { marks } = describePlot({ ...figure, series: first ? [first] : [] }, { width: 566, height: 408 });
		expect(marks.some(({ kind }) => kind === 'label')).toBe(false);
		expect(marks.filter((mark) => mark.class === 'band-edge')).toHaveLength(2);
	});
});
