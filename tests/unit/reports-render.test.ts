import { describe, expect, it } from 'vitest';
import {
	createRenderer,
	numberPlacements,
	renderSection,
	sectionTree,
	suggestForNumber,
	suggestLinks
} from '$lib/reports';
import type { Evaluation, ShownComparison } from '$lib/worksheets';
import { elementsOf, evaluation, quantity } from './reports-fixture';

const known = evaluation();

function blocks(source: string, shown: Evaluation | null = known) {
	return renderSection(source, { evaluation: shown, sectionNumber: 3 }).blocks;
}

function html(source: string, shown: Evaluation | null = known): string {
	return blocks(source, shown)
		.map((block) => (block.kind === 'prose' ? block.html : `[${block.label}]`))
		.join('\n');
}

describe('blocks', () => {
	it('are numbered in order and know their place in the source', () => {
		const source = '# Results\n\nText.\n\n[a]: http://a.b\n\n::figure[line]\n\n- one\n- two\n';
		const made = blocks(source);
		expect(
			made.map((block) => [block.number, block.id, block.kind, source.slice(block.start, block.end)])
		).toEqual([
			['3.1', 'b-3-1', 'prose', '# Results'],
			['3.2', 'b-3-2', 'prose', 'Text.'],
			['3.3', 'b-3-3', 'figure', '::figure[line]'],
			['3.4', 'b-3-4', 'prose', '- one\n- two']
		]);
		expect(blocks('')).toEqual([]);
		expect(blocks('\n  \n[a]: b\n')).toEqual([]);
	});

	it('that are links say what they are', () => {
		expect(blocks('::workings[H_vap]\n\n::comparison[H_vap]\n\n::table[readings]')).toMatchObject([
			{ kind: 'workings', name: 'H_vap', known: true, label: 'Calculation 1', message: null, nearest: null },
			{ kind: 'comparison', known: true, label: 'Comparison 1' },
			{ kind: 'table', known: true, label: 'Table 1' }
		]);
		expect(blocks('::figure[lines]')).toMatchObject([
			{
				kind: 'figure',
				known: false,
				label: 'Figure 1',
				message: 'No figure named lines. There is: line.',
				nearest: 'line'
			}
		]);
		expect(blocks('::figure')[0]).toMatchObject({
			known: false,
			message: 'This link names no figure. There is: line.'
		});
		expect(blocks('::figure[readings]')[0]).toMatchObject({
			message:
				'No figure named readings. There is a table of that name: ::table[readings] on its own line. There is: line.'
		});
		expect(blocks('::figure[line]', null)[0]).toMatchObject({
			known: false,
			message: 'line: shown when the readings are worked up.'
		});
		expect(blocks('::figure[line]', { ...known, figures: {} })[0]).toMatchObject({
			message: 'No figure named line. There are no figures yet.',
			nearest: null
		});
	});

	it('inside quotes and lists stay text', () => {
		expect(html('> ::figure[line]')).toContain('<p>::figure[line]</p>');
		expect(html('- ::table[readings]')).toContain('::table[readings]');
	});

	it('take the numbers of the whole report when told', () => {
		const numbering = numberPlacements([
			'::figure[line]\n\n::figure[other]',
			'::figure[line]\n\n::figure[third]\n\n::table[readings]'
		]);
		expect({ ...numbering.figure }).toEqual({ line: 1, other: 2, third: 3 });
		const section = renderSection('::figure[third]\n\nSee :figure[line] and :figure[nope].', {
			evaluation: known,
			sectionNumber: 2,
			numbering
		});
		expect(section.blocks[0]).toMatchObject({ number: '2.1', label: 'Figure 3' });
		expect(section.blocks[1]).toMatchObject({ kind: 'prose' });
		const prose = section.blocks[1]?.kind === 'prose' ? section.blocks[1].html : '';
		expect(prose).toContain(
			'<a class="cross-reference" href="#figure-line" data-name="line" data-run="\uFFFC">Figure 1</a>'
		);
		expect(prose).toContain('No figure named nope. There is: line.');
	});
});

describe('links inside prose', () => {
	it('show the value, and speak it', () => {
		const made = html('The enthalpy is :value[H_vap].');
		expect(made).toBe(
			'<p>The enthalpy is <span class="linked-value" data-name="H_vap" data-run="\uFFFC"><span aria-hidden="true">41.6(6) kJ mol<sup>−1</sup></span><span class="sr-only select-none">41.6(6) kJ mol-1, spoken</span></span>.</p>'
		);
		expect(html(':value[line.slope]')).toContain('−5003(72) K');
		expect(html('::value[T_b]')).toContain('linked-value');
		expect(html('**a :value[T_b]** | `:value[T_b]` \\:value[T_b]')).toMatch(
			/<strong>a <span class="linked-value".*<code>:value\[T_b\]<\/code> :value\[T_b\]/s
		);
	});

	it('to a name that does not exist show the names that do', () => {
		const made = html('Is :value[Hvap].');
		expect(made).toContain('<span class="unknown-link" data-name="Hvap" data-run="\uFFFC"><code>Hvap</code>');
		expect(made).toContain(
			'No value named Hvap. Nearest: H_vap. There are: H_vap, line.slope, line.intercept, T_b, p_b.'
		);
		expect(html(':value[zzz]')).not.toContain('Nearest');
		const many = {
			...known,
			quantities: Object.fromEntries(
				Array.from({ length: 12 }, (_, n) => [`v${n}`, quantity(`v${n}`, n, null, 'K', `${n} K`)])
			),
			fits: {}
		};
		expect(html(':value[qqqq]', many)).toContain('There are: v0, v1, v2, v3, v4, v5, v6, v7 and 4 more.');
	});
});

describe('what a report does not have', () => {
	it('comes back as the text it was', () => {
		expect(html('At 10:30 and a ratio 1:2, note:this, ::nothing[*x*]{a=b}')).toBe(
			'<p>At 10:30 and a ratio 1:2, note:this, ::nothing[<em>x</em>]{a=b}</p>'
		);
		expect(html('::unknown[x]{y}')).toBe('<p>::unknown[x]{y}</p>');
		expect(html(':::warn[x]\nabc\n:::')).toBe('<p>:::warn[x]</p>\n<p>abc</p>\n<p>:::</p>');
		expect(html('a <b>c</b>')).toBe('<p>a &#x3C;b>c&#x3C;/b></p>');
		expect(html('<div>\nx\n</div>')).toBe('<p>&#x3C;div>\nx\n&#x3C;/div></p>');
	});

	it('is told where it is a picture', () => {
		expect(html('![Flask](https://example.org/x.png)')).toBe(
			'<p>[Picture not shown: Flask. Add it as a file.]</p>'
		);
		const own = '/api/v1/files/0198c0de-0000-7000-8000-00000000002a';
		expect(html(`![Flask](${own})`)).toBe(`<p><img src="${own}" alt="Flask"></p>`);
	});
});

describe('markup', () => {
	it('has headings below those of the page, and links that tell nobody where they came from', () => {
		expect(html('# A\n\n###### B')).toBe('<h3>A</h3>\n<h6>B</h6>');
		expect(html('[a](https://example.org) [b](mailto:a@b.c) [c](#x)')).toBe(
			'<p><a href="https://example.org" rel="nofollow noopener noreferrer">a</a> <a href="mailto:a@b.c">b</a> <a href="#x">c</a></p>'
		);
		expect(html('- [ ] open\n- [x] done')).toBe('<ul>\n<li>[ ] open</li>\n<li>[x] done</li>\n</ul>');
	});

	it('numbers notes over the section and joins both ways', () => {
		const source = 'One[^b].\n\nTwo[^a] and one again[^b].\n\n[^a]: Second.\n[^b]: First.';
		const made = html(source);
		expect(made).toContain('One<sup class="note-mark" id="note-mark-3-1"><a href="#note-3-1">1</a></sup>.');
		expect(made).toContain(
			'Two<sup class="note-mark" id="note-mark-3-2"><a href="#note-3-2">2</a></sup> and one again<sup class="note-mark"><a href="#note-3-1">1</a></sup>.'
		);
		expect(made).toContain(
			'<div class="note" id="note-3-2"><span class="note-number"><a href="#note-mark-3-2">2</a></span> <p>Second.</p></div>'
		);
		const ids = elementsOf(made).flatMap((element) =>
			element.attrs.filter(({ name }) => name === 'id').map(({ value }) => value)
		);
		expect(new Set(ids).size).toBe(ids.length);
	});

	it('typesets formulas and shows the source of those that are none', () => {
		expect(html('$x^2$')).toMatch(/^<p><span class="formula" data-run="x\^2"><span class="katex">/);
		expect(html('$$\nx\n$$')).toMatch(
			/^<div class="formula formula-display" data-run="x"><span class="katex-display">/
		);
		expect(html('$\\frac{1$')).toContain(
			'<code>\\frac{1</code> <span class="formula-note">Not a formula yet: '
		);
	});
});

describe('createRenderer', () => {
	const paragraphs = Array.from({ length: 20 }, (_, n) => `Paragraph ${n} with :value[H_vap] and $x_${n}$.`);

	it('makes only the changed block again', () => {
		const renderer = createRenderer();
		const context = { evaluation: known, sectionNumber: 1 };
		renderer.renderSection(paragraphs.join('\n\n'), context);
		expect(renderer.made).toBe(20);
		renderer.renderSection(['Longer by a word.', ...paragraphs.slice(1)].join('\n\n'), context);
		expect(renderer.made).toBe(21);
	});

	it('makes blocks again when a value they show changes, and only those', () => {
		const renderer = createRenderer();
		const source = 'A :value[H_vap].\n\nB :value[T_b].\n\nC.';
		const first = renderer.renderSection(source, { evaluation: known, sectionNumber: 1 });
		const changed = {
			...known,
			quantities: { ...known.quantities, T_b: quantity('T_b', 374, 0.3, 'K', '374.0(3) K') }
		};
		const second = renderer.renderSection(source, { evaluation: changed, sectionNumber: 1 });
		expect(renderer.made).toBe(4);
		expect(second.blocks[0]).toEqual(first.blocks[0]);
		expect(second.blocks[1]).toMatchObject({ html: expect.stringContaining('374.0(3) K') });
		renderer.renderSection(source, { evaluation: null, sectionNumber: 1 });
		expect(renderer.made).toBe(6);
	});

	it('gives what a fresh renderer gives, whatever it made before', () => {
		const renderer = createRenderer(5);
		const sources = [
			'A[^1].\n\n[^1]: n',
			'B[^0] A[^1].\n\n[^1]: n\n\n[^0]: m',
			'    code',
			'x\n    code',
			'[a]\n\n[a]: http://x.y',
			'[a]\n\n[a]: http://z.y',
			'[a]'
		];
		for (const sectionNumber of [1, 2]) {
			for (const source of [...sources, ...[...sources].reverse()]) {
				const context = { evaluation: known, sectionNumber };
				expect(renderer.renderSection(source, context)).toEqual(
					createRenderer().renderSection(source, context)
				);
			}
		}
	});
});

describe('suggestLinks', () => {
	it('puts names that begin as typed first, then labels, then the rest', () => {
		expect(suggestLinks(known, 'h').map((link) => link.insert)).toEqual([
			':value[H_vap]',
			'::workings[H_vap]',
			'::comparison[H_vap]'
		]);
		expect(suggestLinks(known, 'boil').map((link) => link.insert)).toEqual([':value[T_b]']);
		expect(suggestLinks(known, 'line').map((link) => link.insert)).toEqual([
			':value[line.slope]',
			':value[line.intercept]',
			'::figure[line]'
		]);
		expect(suggestLinks(known, '')).toHaveLength(9);
		expect(suggestLinks(known, 'zzz')).toEqual([]);
		expect(suggestLinks(known, 'T_b')[0]).toEqual({
			kind: 'value',
			name: 'T_b',
			label: 'Boiling temperature',
			display: '373.5(3) K',
			insert: ':value[T_b]'
		});
	});

	it('knows values by row, results before what was typed, and names them by their key', () => {
		const grouped = evaluation();
		grouped.quantities = {
			p_b: quantity('p_b', 99.4, null, 'kPa', '99.4 kPa', 'Barometric pressure'),
			'gamma.argon': quantity('gamma.argon', 1.63, 0.01, '1', '1.633(4)', 'Ratio, argon'),
			'gamma.nitrogen': quantity('gamma.nitrogen', 1.386, 0.004, '1', '1.386(4)', 'Ratio, nitrogen'),
			'H_c.benzoic-acid': quantity('H_c.benzoic-acid', -3227, 2, 'kJ/mol', '−3227(2) kJ/mol', 'Enthalpy')
		};
		grouped.comparisons = {
			'gamma.argon': {
				name: 'gamma',
				group: 'argon',
				quantity: 'gamma',
				sentence: 'Measured 1.633(4).'
			} as ShownComparison
		};
		const links = suggestLinks(grouped, '');
		expect(links.filter(({ kind }) => kind === 'value').map(({ name }) => name)).toEqual([
			'gamma.argon',
			'gamma.nitrogen',
			'line.slope',
			'line.intercept',
			'p_b',
			'H_c.benzoic-acid'
		]);
		expect(links.find(({ kind }) => kind === 'comparison')).toMatchObject({
			insert: '::comparison[gamma.argon]',
			label: 'Ratio, argon: Measured 1.633(4).'
		});
		const section = renderSection(':value[H_c.benzoic-acid] and :value[gamma]\n\n::comparison[gamma.argon]', {
			evaluation: grouped,
			sectionNumber: 1
		});
		expect(section.blocks[0]).toMatchObject({ kind: 'prose' });
		expect(JSON.stringify(section.blocks[0])).toContain('−3227(2)');
		expect(JSON.stringify(section.blocks[0])).toContain(
			'gamma has a value for each row: gamma.argon, gamma.nitrogen.'
		);
		expect(section.blocks[1]).toMatchObject({ kind: 'comparison', name: 'gamma.argon', known: true });
	});

	it('knows a number that the workings know', () => {
		expect(suggestForNumber(known, '373.5 K').map((link) => link.name)).toEqual(['T_b']);
		expect(suggestForNumber(known, '41620 J/mol').map((link) => link.name)).toEqual(['H_vap']);
		expect(suggestForNumber(known, '373.1 K')).toEqual([]);
		expect(suggestForNumber(known, '373.5')).toEqual([]);
	});
});

describe('sectionTree', () => {
	it('follows the outline, with sections nobody wrote yet', () => {
		const outline = [
			{ key: 'abstract', title: 'Abstract', owner: 'author' as const, guide: '' },
			{ key: 'results', title: 'Results', owner: 'team' as const, guide: '' }
		];
		const tree = sectionTree(outline, {
			results: '# The *fit*\n\nSlope is :value[line.slope], don’t round 41.6.'
		});
		expect(tree).toMatchObject([
			{ number: 1, key: 'abstract', blocks: 0, words: 0, headings: [] },
			{
				number: 2,
				key: 'results',
				owner: 'team',
				blocks: 2,
				words: 7,
				headings: [{ block: '2.1', text: 'The fit' }]
			}
		]);
	});
});
