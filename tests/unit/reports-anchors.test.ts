import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	attach,
	blockAt,
	describePlaced,
	describeSelection,
	offsetToPlace,
	projectSection,
	renderSection,
	runsLength,
	runsText,
	runsToOffset,
	type Anchor,
	type Attachment,
	type RunTree
} from '$lib/reports';
import { evaluation, marked, nodesOf, runTreeOf } from './reports-fixture';

const known = evaluation();

/** Anchor of the words between « and » of a source whose text is its own projection. */
function anchorOf(source: string): Anchor {
	const { text, start, end } = marked(source);
	const projection = projectSection(text, known);
	const shown = marked(projectSection(source, known).text);
	expect(shown.text).toBe(projection.text);
	const anchor = describeSelection(projection, shown.start, shown.end);
	if (!anchor) throw new Error(`nothing marked in ${source} (${start} to ${end})`);
	return anchor;
}

/** The later draft with the words found between « and », and how they were found. */
function found(anchor: Anchor, later: string): string {
	const projection = projectSection(later, known);
	const result = attach(anchor, projection);
	if (result.attached === 'lost') return `lost: ${result.sentence}`;
	const points = [...projection.text];
	const words = `${points.slice(0, result.start).join('')}«${points.slice(result.start, result.end).join('')}»${points.slice(result.end).join('')}`;
	return `${result.attached}${result.changed ? ', changed' : ''}: ${words}`;
}

describe('projectSection', () => {
	it('is what a reader reads, blocks joined by line ends', () => {
		const source =
			'# The *fit*\n\nIs :value[H_vap], $x^2$, `code` and **bold**[^1].\n\n::figure[line]\n\n- a\n- b\n\n[^1]: Note.';
		const projection = projectSection(source, known);
		expect(projection.text).toBe('The fit\nIs \uFFFC, x^2, code and bold1.\n\uFFFC\n\na\nb\n\n1 Note.');
		expect(projection.links).toEqual([
			{ position: 11, kind: 'value', name: 'H_vap', shown: '41.6(6) kJ mol-1' },
			{ position: 35, kind: 'figure', name: 'line', shown: 'Figure' }
		]);
		expect(projection.length).toBe([...projection.text].length);
		expect(
			projection.blocks.map(({ index, kind, name, start, end }) => [index, kind, name, start, end])
		).toEqual([
			[0, 'prose', null, 0, 7],
			[1, 'prose', null, 8, 34],
			[2, 'figure', 'line', 35, 36],
			[3, 'prose', null, 37, 42],
			[4, 'prose', null, 43, 50]
		]);
		expect(blockAt(projection, 35)?.name).toBe('line');
		expect(blockAt(projection, 7)?.index).toBe(0);
		expect(
			projection.blocks.map(({ sourceStart, sourceEnd }) => source.slice(sourceStart, sourceEnd))[2]
		).toBe('::figure[line]');
	});

	it('does not change with the values, known or not', () => {
		const source = 'A :value[H_vap] and :value[nope], :figure[line].\n\n::table[nope]';
		expect(projectSection(source, null).text).toBe(projectSection(source, known).text);
		expect(projectSection(source, null).links.map(({ shown }) => shown)).toEqual([null, null, null, null]);
	});

	it('counts code points and does not take a typed U+FFFC for a link', () => {
		const projection = projectSection('\u{1F9EA}\u{1F9EA} \uFFFC :value[T_b] $\uFFFC$ :value[p_b]', known);
		expect(projection.links.map(({ position, name }) => [position, name])).toEqual([
			[5, 'T_b'],
			[9, 'p_b']
		]);
	});
});

describe('describeSelection', () => {
	it('keeps the words, 32 code points on both sides and the position', () => {
		const before = 'abcdefghijklmnopqrstuvwxyz 0123456789 ';
		const anchor = anchorOf(`${before}«the words» ${before}`);
		expect(anchor).toEqual({
			projection: 1,
			selectors: [
				{
					type: 'TextQuoteSelector',
					exact: 'the words',
					prefix: 'ghijklmnopqrstuvwxyz 0123456789 ',
					suffix: ' abcdefghijklmnopqrstuvwxyz 0123'
				},
				{ type: 'TextPositionSelector', start: 38, end: 47 }
			],
			links: []
		});
	});

	it('counts in code points', () => {
		const anchor = anchorOf('\u{1F9EA} flask «\u{1F9EA}\u{1F525}» hot');
		expect(anchor.selectors).toEqual([
			{ type: 'TextQuoteSelector', exact: '\u{1F9EA}\u{1F525}', prefix: '\u{1F9EA} flask ', suffix: ' hot' },
			{ type: 'TextPositionSelector', start: 8, end: 10 }
		]);
	});

	it('leaves out blanks at the ends and is null when nothing is left', () => {
		const projection = projectSection('one  two\n\nthree');
		expect(describeSelection(projection, 3, 9)?.selectors[1]).toEqual({
			type: 'TextPositionSelector',
			start: 5,
			end: 8
		});
		expect(describeSelection(projection, 9, 3)?.selectors[1]).toEqual({
			type: 'TextPositionSelector',
			start: 5,
			end: 8
		});
		expect(describeSelection(projection, 3, 5)).toBeNull();
		expect(describeSelection(projection, 8, 9)).toBeNull();
		expect(describeSelection(projection, -5, 500)?.selectors[1]).toEqual({
			type: 'TextPositionSelector',
			start: 0,
			end: projection.length
		});
	});

	it('names links and takes a figure by its name', () => {
		expect(anchorOf('It is «:value[H_vap] at :value[T_b]» here.').links).toEqual(['H_vap', 'T_b']);
		const projection = projectSection('Text.\n\n::figure[line]\n\nText.');
		expect(describeSelection(projection, 5, 8)).toEqual({
			projection: 1,
			selectors: [
				{ type: 'FragmentSelector', value: 'figure=line' },
				{ type: 'TextPositionSelector', start: 6, end: 7 }
			],
			links: ['line']
		});
	});
});

// Seconds on an idle machine; the limit leaves room for one that runs other things at once.
describe('attach', { timeout: 30_000 }, () => {
	const draft =
		'The flask was heated slowly. Then the pressure was read, «about 400 torr», and noted at once.';

	it('finds words at their place', () => {
		expect(found(anchorOf(draft), marked(draft).text)).toBe(`position: ${draft}`);
	});

	it('finds words that moved', () => {
		expect(found(anchorOf(draft), `A new beginning.\n\n${marked(draft).text}`)).toBe(
			`quote: A new beginning.\n${draft}`
		);
		expect(found(anchorOf(draft), marked(draft).text.slice(29))).toBe(`quote: ${draft.slice(29)}`);
	});

	it('chooses among equal words by what stands around them', () => {
		const anchor = anchorOf('We read 400 torr at noon. We read «400 torr» at night.');
		expect(
			found(anchor, 'We read 400 torr at dawn. We read 400 torr at noon. We read 400 torr at night.')
		).toBe('quote: We read 400 torr at dawn. We read 400 torr at noon. We read «400 torr» at night.');
		// The same words now stand where the marked ones stood.
		expect(
			found(
				anchorOf('aaaa bbbb «word» cccc dddd. eeee word ffff.'),
				'eeee gggg word hhhh iiii. aaaa bbbb word cccc dddd.'
			)
		).toBe('quote: eeee gggg word hhhh iiii. aaaa bbbb «word» cccc dddd.');
	});

	it('finds words that changed a little', () => {
		expect(
			found(
				anchorOf('Then «the pressure was read from the manometer» twice.'),
				'Later «the pressures were read from the manometer» twice.'.replace(/[«»]/g, '')
			)
		).toBe('approximate, changed: Later «the pressures were read from the manometer» twice.');
	});

	it('finds the place of words that were rewritten', () => {
		expect(
			found(
				anchorOf('The boiling temperature came to «372.9 K», below the handbook value.'),
				'The boiling temperature came to :value[T_b], below the handbook value.'
			)
		).toBe('approximate, changed: The boiling temperature came to «\uFFFC», below the handbook value.');
	});

	it('says that words are gone', () => {
		expect(found(anchorOf(draft), 'Something else altogether stands here now.')).toBe(
			'lost: The words "about 400 torr" are no longer in this section.'
		);
		expect(found(anchorOf(draft), '')).toBe(
			'lost: The words "about 400 torr" are no longer in this section.'
		);
		expect(
			found(anchorOf('We used «the» balance of room 4.'), 'Under the hood of the car the engine was cold.')
		).toMatch(/^lost: /);
		const long = `${'very '.repeat(30)}long`;
		expect(found(anchorOf(`«${long}»`), 'x')).toBe(
			`lost: The words "${'very '.repeat(30).slice(0, 57)}..." are no longer in this section.`
		);
	});

	it('tells links apart by name', () => {
		const anchor = anchorOf('First :value[T_b] then, second «:value[H_vap]» then.');
		expect(found(anchor, 'First :value[H_vap] then, second :value[T_b] then.')).not.toMatch(
			/^(position|quote): /
		);
		expect(found(anchor, 'Zero. First :value[T_b] then, second :value[H_vap] then.')).toBe(
			'quote: Zero. First \uFFFC then, second «\uFFFC» then.'
		);
	});

	it('follows a figure by its name, wherever it goes', () => {
		const projection = projectSection('Text.\n\n::figure[line]');
		const anchor = describeSelection(projection, 6, 7);
		if (!anchor) throw new Error('no anchor');
		expect(attach(anchor, projectSection('::table[line]\n\nNew.\n\n::figure[line]'))).toEqual({
			attached: 'fragment',
			start: 7,
			end: 8,
			block: 2,
			changed: false
		});
		expect(attach(anchor, projectSection('Text.'))).toEqual({
			attached: 'lost',
			sentence: 'The figure line is no longer in this section.'
		});
		expect(attach(describePlaced('workings', 'H_vap'), projectSection('Text.'))).toMatchObject({
			sentence: 'The calculation H_vap is no longer in this section.'
		});
	});

	it('finds every selection again in the same text, and after text put before it', () => {
		const word = fc.constantFrom(
			'alpha',
			'beta',
			'gamma ray',
			':value[T_b]',
			'$x$',
			'\u{1F9EA}',
			'the',
			'**bold**',
			'at 10:30',
			'\n\n',
			'::figure[line]\n\n'
		);
		fc.assert(
			fc.property(fc.array(word, { minLength: 3, maxLength: 40 }), fc.nat(), fc.nat(), (words, a, b) => {
				const source = words.join(' ');
				const projection = projectSection(source);
				const [start, end] = [a % (projection.length + 1), b % (projection.length + 1)];
				const anchor = describeSelection(projection, start, end);
				if (!anchor) return;
				const position = anchor.selectors.find((selector) => selector.type === 'TextPositionSelector');
				const isFragment = anchor.selectors[0]?.type === 'FragmentSelector';
				const again = attach(anchor, projection) as Exclude<Attachment, { attached: 'lost' }>;
				if (!isFragment)
					expect(again).toMatchObject({
						attached: 'position',
						start: position?.start,
						end: position?.end,
						changed: false
					});
				const later = attach(
					JSON.parse(JSON.stringify(anchor)) as Anchor,
					projectSection(`An opening sentence.\n\n${source}`)
				);
				expect(later.attached).not.toBe('lost');
				const shift = 'An opening sentence.\n'.length;
				if (!isFragment && later.attached === 'quote' && !/^\n*$/.test(source)) {
					const text = [...projectSection(`An opening sentence.\n\n${source}`).text];
					const quote = anchor.selectors.find((selector) => selector.type === 'TextQuoteSelector');
					expect(text.slice(later.start, later.end).join('')).toBe(quote?.exact);
					expect(later.start).toBeGreaterThanOrEqual(shift);
				}
			}),
			{ numRuns: 80, seed: 11 }
		);
	});
});

describe('runs of a page', () => {
	const [block] = renderSection('A **bold :value[H_vap] end** $x^2$ \u{1F9EA} z', {
		evaluation: known,
		sectionNumber: 1
	}).blocks;
	const tree = runTreeOf(nodesOf(block?.kind === 'prose' ? block.html : ''));

	it('are the projection of the block', () => {
		expect(runsText(tree)).toBe('A bold \uFFFC end x^2 \u{1F9EA} z');
		expect(runsText(tree)).toBe(projectSection('A **bold :value[H_vap] end** $x^2$ \u{1F9EA} z').text);
	});

	it('turn boundary points of a selection into offsets', () => {
		// p > "A ", strong > ("bold ", link, " end"), " ", formula, " x z"
		expect(runsToOffset(tree, { path: [0, 0], offset: 1 }, 'start')).toBe(1);
		expect(runsToOffset(tree, { path: [0, 1, 0], offset: 4 }, 'end')).toBe(6);
		// An element's own offset counts its children.
		expect(runsToOffset(tree, { path: [0, 1], offset: 2 }, 'start')).toBe(8);
		expect(runsToOffset(tree, { path: [], offset: 1 }, 'end')).toBe(runsLength(tree));
		// Inside a link or formula: its edge, however deep.
		expect(runsToOffset(tree, { path: [0, 1, 1, 0, 0], offset: 3 }, 'start')).toBe(7);
		expect(runsToOffset(tree, { path: [0, 1, 1, 0, 0], offset: 3 }, 'end')).toBe(8);
		expect(runsToOffset(tree, { path: [0, 3, 0, 0], offset: 0 }, 'end')).toBe(16);
		// UTF-16 units of the page become code points.
		expect(runsToOffset(tree, { path: [0, 4], offset: 3 }, 'start')).toBe(18);
		expect(runsToOffset(tree, { path: [9, 9], offset: 3 }, 'start')).toBe(runsLength(tree));
	});

	it('come back from offsets to boundary points', () => {
		expect(offsetToPlace(tree, 2, 'start')).toEqual({ path: [0, 1, 0], offset: 0 });
		expect(offsetToPlace(tree, 2, 'end')).toEqual({ path: [0, 0], offset: 2 });
		expect(offsetToPlace(tree, 7, 'start')).toEqual({ path: [0, 1], offset: 1 });
		expect(offsetToPlace(tree, 8, 'end')).toEqual({ path: [0, 1], offset: 2 });
		expect(offsetToPlace(tree, 18, 'start')).toEqual({ path: [0, 4], offset: 3 });
		expect(offsetToPlace(tree, 99, 'end')).toEqual({ path: [0, 4], offset: 5 });
	});

	it('are inverse to each other outside links and formulas', () => {
		const node: fc.Arbitrary<RunTree> = fc.letrec<{ tree: RunTree }>((tie) => ({
			tree: fc.oneof(
				{ maxDepth: 4 },
				fc.record({ text: fc.string({ unit: 'grapheme', maxLength: 5 }) }),
				fc.record({ atom: fc.constantFrom('\uFFFC', 'x^2') }),
				fc.record({ children: fc.array(tie('tree'), { maxLength: 4 }) })
			)
		})).tree;
		fc.assert(
			fc.property(node, (child) => {
				const root = { children: [child, { text: 'end' }] };
				const inside = new Set<number>();
				let before = 0;
				const visit = (part: RunTree): void => {
					if ('children' in part) return part.children.forEach(visit);
					const length = runsLength(part);
					if ('atom' in part) for (let point = 1; point < length; point += 1) inside.add(before + point);
					before += length;
				};
				visit(root);
				for (let offset = 0; offset <= runsLength(root); offset += 1) {
					if (inside.has(offset)) continue;
					for (const edge of ['start', 'end'] as const)
						expect(runsToOffset(root, offsetToPlace(root, offset, edge), edge)).toBe(offset);
				}
			}),
			{ seed: 3 }
		);
	});
});
