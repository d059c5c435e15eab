import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { describeHistogram, describePlot, describeStrip, makeAxis } from '$lib/plots';
import { evaluate } from '$lib/worksheets';
import { readingsOf, row, tenSteps, water } from './worksheets-fixture';

describe('axes', () => {
	it('puts round ticks inside the data, minor ones between', () => {
		const axis = makeAxis([0, 100], { start: 0, end: 500, labelRoom: 72, air: 0 });
		expect(axis.major.map(({ text, at }) => `${text} ${at}`)).toEqual([
			'0 0',
			'20 100',
			'40 200',
			'60 300',
			'80 400',
			'100 500'
		]);
		expect(axis.minor).toHaveLength(15);
	});

	it('takes a power of ten out of small numbers and keeps true minus signs', () => {
		const axis = makeAxis([-0.002, 0.002], { start: 0, end: 400, labelRoom: 80 });
		expect(axis.exponent).toBe(-3);
		expect(axis.major.map(({ text }) => text)).toContain('\u22122');
		expect(axis.major.map(({ text }) => text)).toContain('0');
	});

	it('holds any values, with ticks in order', () => {
		const list = fc.array(fc.double({ min: -1e9, max: 1e9, noNaN: true }), { maxLength: 10 });
		fc.assert(
			fc.property(list, fc.boolean(), (values, symmetric) => {
				const axis = makeAxis(values, { start: 300, end: 0, labelRoom: 40, symmetric });
				for (const value of values) expect(value >= axis.from && value <= axis.to).toBe(true);
				for (const { at } of [...axis.major, ...axis.minor])
					expect(at >= -1e-6 && at <= 300.000001).toBe(true);
				const ats = axis.major.map(({ at }) => at);
				expect([...ats].sort((a, b) => b - a)).toEqual(ats);
			}),
			{ numRuns: 1000, seed: 310 }
		);
	});
});

describe('a line with its points', () => {
	const rows = [...tenSteps(), row('out', '95.00', '650', { status: 'excluded', reason: 'Bumping.' })];
	const figure = evaluate(water, readingsOf(rows)).figures['line'];
	if (!figure) throw new Error('There is no figure.');
	const plot = describePlot(figure, { width: 566, height: 408 });
	const of = (name: string) => plot.marks.filter((mark) => mark.class === name);

	it('draws every point, the left-out one as such, and the fitted ones again as residuals', () => {
		expect(of('point')).toHaveLength(20);
		expect(of('left-out')).toHaveLength(1);
		expect(of('fit')).toHaveLength(1);
		expect(of('band')).toHaveLength(1);
		expect(of('band-edge')).toHaveLength(2);
		expect(of('axis')).toHaveLength(4);
	});

	it('gives the residuals 28 % of the height inside the margins', () => {
		const panel = plot.residual;
		expect(panel && panel.start - panel.end).toBe(Math.round(0.28 * (408 - 50 - 30)));
		expect(plot.y.start).toBeLessThan(panel?.end ?? 0);
	});

	it('stays inside the drawing', () => {
		for (const mark of plot.marks) {
			if (mark.kind === 'point') {
				expect(mark.x > 0 && mark.x < plot.width && mark.y > 0 && mark.y < plot.height).toBe(true);
			}
		}
	});

	it('needs no line', () => {
		const bare = describePlot({ ...figure, series: [] }, { width: 400, height: 300 });
		expect(bare.residual).toBeNull();
		expect(bare.marks.some(({ class: name }) => name === 'fit')).toBe(false);
	});
});

describe('strips and histograms', () => {
	it('gives every value its own place', () => {
		const value = fc.integer({ min: 0, max: 100 });
		const group = fc.array(value, { maxLength: 40 });
		fc.assert(
			fc.property(fc.array(group, { minLength: 1, maxLength: 4 }), (groups) => {
				const strip = describeStrip(
					groups.map((values, i) => ({
						key: String(i),
						label: `Section ${i}`,
						values: values.map((each, j) => ({ key: String(j), value: each }))
					})),
					{ width: 640, atLeast: [0, 100] }
				);
				for (const row of strip.groups) {
					const places = new Set(row.points.map(({ x, y }) => `${x.toFixed(3)} ${y.toFixed(3)}`));
					expect(places.size).toBe(row.points.length);
					for (const { y } of row.points) expect(Math.abs(y - row.y)).toBeLessThan(28);
				}
			}),
			{ numRuns: 300, seed: 310 }
		);
	});

	it('summarises each group in data and in px', () => {
		const strip = describeStrip(
			[{ key: 'a', label: 'Linden', values: [60, 70, 80].map((value) => ({ key: String(value), value })) }],
			{ width: 500, atLeast: [0, 100] }
		);
		const [group] = strip.groups;
		expect(group?.summary?.data.median).toBe(70);
		expect(group?.summary?.x.median).toBe(group?.points[1]?.x);
		expect(
			describeStrip([{ key: 'a', label: 'Nobody', values: [] }], { width: 500 }).groups[0]?.summary
		).toBeNull();
	});

	it('stands the bars of a histogram on the axis', () => {
		const { bars, y } = describeHistogram([61, 62, 75, 88], {
			width: 400,
			height: 240,
			edges: [60, 70, 80, 90]
		});
		expect(bars.map(({ count }) => count)).toEqual([2, 1, 1]);
		for (const bar of bars) expect(bar.y + bar.height).toBeCloseTo(y.start, 9);
		expect(y.major.map(({ text }) => text)).toEqual(['0', '1', '2']);
	});
});
