import { describe, expect, it } from 'vitest';
import * as Y from 'yjs';
import { Awareness } from 'y-protocols/awareness';
import { directiveFor, offerLinks } from '../../src/lib/state/editor-links';
import { markLine } from '../../src/lib/state/editor-marks';
import { blockOf, presenceIn } from '../../src/lib/state/editor-presence';
import type { Evaluation, ShownQuantity } from '$lib/worksheets';

const quantity = (
	name: string,
	label: string,
	value: number,
	u: number,
	unit: string,
	text: string
): ShownQuantity => ({
	name,
	label,
	symbol: name,
	value,
	unit,
	standardUncertainty: u,
	degreesOfFreedom: 8,
	coverageFactor: 2.306,
	expanded95: 2.306 * u,
	display: { text, tex: text, html: text, speech: text },
	budget: []
});
const evaluation: Evaluation = {
	engine: 'test',
	problems: [],
	quantities: {
		H_vap: quantity(
			'H_vap',
			'Enthalpy of vaporization',
			41.91,
			0.25,
			'kJ/mol',
			'41.91(25)\u2009kJ\u2009mol\u207b\u00b9'
		),
		T_b: quantity('T_b', 'Normal boiling point', 373.39, 0.21, 'K', '373.39(21)\u2009K')
	},
	tables: {},
	fits: {},
	comparisons: {},
	figures: {
		line: {
			name: 'line',
			caption: 'The line',
			x: { label: '', symbol: '', unit: '1' },
			y: { label: '', symbol: '', unit: '1' },
			series: [],
			line: null
		}
	},
	workings: {}
};
const names = (before: string, asked = false) =>
	offerLinks(evaluation, before, asked)?.links.map(({ kind, name }) => `${kind} ${name}`) ?? null;

describe('what the editor offers to link', () => {
	it('says nothing while somebody just writes', () => {
		expect(names('The enthalpy is ')).toBeNull();
		expect(names('The en')).toBeNull();
		expect(names('At 10:30 we began')).toBeNull();
		expect(offerLinks(null, ':value[', true)).toBeNull();
	});

	it('completes a begun directive with names of its kind', () => {
		expect(names('is :value[')).toEqual(['value H_vap', 'value T_b']);
		expect(names('is :value[T')).toEqual(['value T_b']);
		expect(names('::figure[')).toEqual(['figure line']);
		expect(names('::figure[zzz')).toBeNull();
		expect(offerLinks(evaluation, 'is :value[T', false)).toMatchObject({ from: 10, manner: 'name' });
	});

	it('asks about a number that the workings know', () => {
		const offer = offerLinks(evaluation, 'boils at 373.4 K', false);
		expect(offer?.links.map(({ name }) => name)).toEqual(['T_b']);
		expect(offer).toMatchObject({ from: 9, manner: 'question' });
		expect(names('boils at 300.0 K')).toBeNull();
		expect(names('an enthalpy of 41.9 kJ/mol')).toEqual(['value H_vap']);
	});

	it('shows all of it when asked, beginning with what the word names', () => {
		expect(names('', true)).toEqual(['value H_vap', 'value T_b', 'figure line']);
		expect(names('the boil', true)).toEqual(['value T_b']);
		expect(offerLinks(evaluation, 'the boil', true)).toMatchObject({ from: 4, manner: 'link' });
		// A word that names nothing stays.
		expect(offerLinks(evaluation, 'the xylophone', true)).toMatchObject({ from: 13 });
	});

	it('gives what is placed a line of its own', () => {
		const placed = {
			kind: 'figure' as const,
			name: 'line',
			label: '',
			display: '',
			insert: '::figure[line]'
		};
		expect(directiveFor(placed, '', '')).toBe('::figure[line]');
		expect(directiveFor(placed, 'Before ', ' after')).toBe('\n\n::figure[line]\n\n');
		const value = { ...placed, kind: 'value' as const, insert: ':value[T_b]' };
		expect(directiveFor(value, 'Before ', ' after')).toBe(':value[T_b]');
	});
});

describe('marks that step back', () => {
	const looks = (line: string) =>
		markLine(line).map(({ from, to, look }) => `${look}: ${line.slice(from, to)}`);

	it('finds headings, lists, emphasis, formulas and links', () => {
		expect(looks('## Heading')).toEqual(['quiet: ## ', 'heading: Heading']);
		expect(looks('- a **b** *c*')).toEqual([
			'quiet: - ',
			'quiet: **',
			'quiet: **',
			'strong: b',
			'quiet: *',
			'quiet: *',
			'slanted: c'
		]);
		expect(looks('$x*y*z$ and :value[H_vap]')).toEqual([
			'quiet: $',
			'quiet: $',
			'formula: x*y*z',
			'link: :value[H_vap]'
		]);
		expect(looks('2 * 3 * 4 costs $5 or $6 today')).toEqual([]);
	});
});

describe('presence', () => {
	it('puts initials beside the block that holds the cursor', () => {
		const doc = new Y.Doc();
		const text = doc.getText('text');
		text.insert(0, 'First block.\n\nSecond block.');
		const awareness = new Awareness(doc);
		const blocks = [
			{ number: '3.1', start: 0, end: 12 },
			{ number: '3.2', start: 14, end: 27 }
		];
		const at = (index: number) =>
			Y.relativePositionToJSON(Y.createRelativePositionFromTypeIndex(text, index)) as unknown;
		const others = (states: [number, Record<string, unknown>][]) => {
			awareness.states = new Map([[doc.clientID, { user: { id: 'me', name: 'ME' } }], ...states]);
			return presenceIn(doc, awareness, blocks, 'me');
		};
		expect(
			others([[7, { user: { id: 'x', name: 'T.L.' }, cursor: { anchor: at(20), head: at(20) } }]])
		).toEqual({
			'3.2': ['T.L.']
		});
		// The same person on a second device, somebody without a cursor, and nonsense are left out.
		expect(
			others([
				[8, { user: { id: 'me', name: 'ME' }, cursor: { head: at(2) } }],
				[9, { user: { id: 'y', name: 'AB' } }],
				[10, { user: { id: 'z', name: 'ZZ' }, cursor: { head: { type: 'rubbish' } } }],
				[11, { user: 'rubbish', cursor: 7 }]
			])
		).toEqual({});
		awareness.destroy();
	});

	it('takes the joint after a block as the block’s', () => {
		const blocks = [
			{ number: '1.1', start: 2, end: 5 },
			{ number: '1.2', start: 8, end: 9 }
		];
		expect([0, 2, 7, 8, 99].map((offset) => blockOf(offset, blocks))).toEqual([
			'1.1',
			'1.1',
			'1.1',
			'1.2',
			'1.2'
		]);
		expect(blockOf(null, blocks)).toBeNull();
		expect(blockOf(3, [])).toBeNull();
	});
});
