import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { csvText, guardedText } from '../../src/lib/server/moderation/csv';
import { spreadOf, summaryOf, type SpreadRow } from '../../src/lib/server/moderation/spread-of';

/** RFC 4180, read one character at a time. */
function parsed(text: string): string[][] {
	const lines: string[][] = [[]];
	let cell = '';
	let quoted = false;
	for (let at = text.startsWith('\uFEFF') ? 1 : 0; at < text.length; at += 1) {
		const one = text[at] ?? '';
		if (quoted && one === '"' && text[at + 1] === '"') {
			cell += '"';
			at += 1;
		} else if (one === '"') quoted = !quoted;
		else if (!quoted && (one === ',' || (one === '\r' && text[at + 1] === '\n'))) {
			lines.at(-1)?.push(cell);
			cell = '';
			if (one === '\r') {
				lines.push([]);
				at += 1;
			}
		} else cell += one;
	}
	return lines.slice(0, -1);
}

const row = (points: number, labSection: string, grader: string): SpreadRow => ({
	labSection,
	grader,
	points,
	levels: []
});

describe('the sentence of the spread', () => {
	it('says so when there is nothing, or too little', () => {
		expect(spreadOf([], [], 0, 20).sentence).toBe('Nothing handed in yet.');
		expect(spreadOf([], [], 7, 20).sentence).toBe('None of 7 reports is marked yet.');
		const few = [1, 2, 3, 4].map((points) => row(points, 'A', 'G'));
		expect(spreadOf(few, [], 7, 20).sentence).toBe(
			'4 of 7 reports marked: too few to speak of a spread. Median 2.5 of 20.'
		);
	});

	it('compares only groups of five and more', () => {
		const rows = [
			...[10, 11, 12, 13, 14].map((points) => row(points, 'Monday', 'Amal')),
			...[15, 16, 17, 18, 19].map((points) => row(points, 'Tuesday', 'Bo')),
			...[1, 1].map((points) => row(points, 'Friday', 'Chen'))
		];
		const { sentence } = spreadOf(rows, [], 12, 20);
		expect(sentence).toContain('Medians by lab section lie 5 points apart, from Monday to Tuesday.');
		expect(sentence).toContain('Medians by grader lie 5 points apart, from Amal to Bo.');
		expect(sentence).not.toContain('Friday');
	});
});

describe('summaries', () => {
	it('have no deviation of one value and nothing of none', () => {
		expect(summaryOf([7])).toMatchObject({ n: 1, mean: 7, standardDeviation: null, median: 7 });
		expect(summaryOf([])).toMatchObject({ n: 0, mean: null, median: null, lowerQuartile: null });
	});
});

describe('the table taken out', () => {
	it('guards texts that a spreadsheet would run, and leaves numbers', () => {
		for (const text of ['=1+1', '+1', '-1', '@x', '\t=1', '\r=1', '\n=1'])
			expect(guardedText(text)).toBe(`'${text}`);
		expect(guardedText('Ferro-Gil')).toBe('Ferro-Gil');
		expect(csvText([[-1.5, '-1.5', null]])).toBe("\uFEFF-1.5,'-1.5,\r\n");
	});

	it('is read back by another program as it was', () => {
		const text = fc.string({ unit: 'grapheme', maxLength: 20 });
		const cell = fc.oneof(text, fc.constantFrom('a,b', 'say "so"', 'two\nlines', 'x\r\ny', ''));
		fc.assert(
			fc.property(fc.array(fc.tuple(cell, cell, fc.integer()), { minLength: 1, maxLength: 6 }), (lines) => {
				expect(parsed(csvText(lines))).toEqual(
					lines.map(([one, two, number]) => [guardedText(one), guardedText(two), String(number)])
				);
			}),
			{ numRuns: 300, seed: 310 }
		);
	});
});
