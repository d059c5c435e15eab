import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	createRenderer,
	projectSection,
	renderSection,
	runsText,
	statedValues,
	type RenderedSection
} from '$lib/reports';
import type { Evaluation } from '$lib/worksheets';
import { elementsOf, evaluation, foreignMarkup, nodesOf, quantity, runTreeOf } from './reports-fixture';

const known = evaluation();

function render(source: string, shown: Evaluation | null = known): RenderedSection {
	return createRenderer(10).renderSection(source, { evaluation: shown, sectionNumber: 1 });
}

function html(source: string): string {
	return render(source)
		.blocks.map((block) => (block.kind === 'prose' ? block.html : ''))
		.join('');
}

// Seconds on an idle machine; the limits leave room for one that runs other things at once.
const patience = { timeout: 30_000 };

describe('hostile text', patience, () => {
	it.each([
		'<script>alert(1)</script>',
		'<img src=x onerror=alert(1)>',
		'a <b onclick="x()">b</b> <!-- c --> <?php ?> <![CDATA[x]]>',
		'<svg><script>alert(1)</script></svg>',
		'[a](javascript:alert(1))',
		'[a](JaVaScRiPt:alert(1))',
		'[a](java\tscript:alert(1)) [b](<java\nscript:alert(1)>)',
		'[a](&#106;avascript:alert(1)) [b](javascript&colon;alert(1))',
		'[a](data:text/html;base64,PHNjcmlwdD4=) [b](vbscript:x) [c](file:///etc/passwd)',
		'[a][x]\n\n[x]: javascript:alert(1)',
		'<javascript:alert(1)>',
		'![a](javascript:alert(1)) ![b](https://example.org/x.png) ![c](data:image/svg+xml,x) ![d](/api/v1/files/../../x)',
		'![a][x]\n\n[x]: https://example.org/x.png "t"',
		'[a](https://example.org "x\\" onmouseover=\\"alert(1)")',
		'`<script>` ``` ```` <script>',
		'```"><script>alert(1)</script>\ncode\n```',
		'$\\href{javascript:alert(1)}{x}$ $\\url{javascript:x}$ $\\includegraphics{https://example.org/x.png}$',
		'$\\htmlClass{a}{b} \\htmlStyle{position:fixed}{x} \\htmlData{a=b}{c} \\htmlId{a}{b}$',
		'$\\text{<script>alert(1)</script>} < \\unknowncommand{"\'}$',
		'$$\n\\text{</annotation><script>alert(1)</script>}\n$$',
		':value[<script>alert(1)</script>] :value["onclick="x] :figure[<b>]',
		':value[H_vap]{onclick=alert(1) style="position:fixed" .x #y}',
		'::figure[<img src=x onerror=alert(1)>]\n\n::table["><script>]{onload=x}',
		':::script\nalert(1)\n:::',
		':script[alert(1)] ::iframe[x]{src=javascript:x}',
		'[^<script>]\n\n[^<script>]: <script>alert(1)</script>',
		'| <script> | `|` |\n|---|---|\n| <img onerror=x> | [a](javascript:x) |',
		'- [x] <input onfocus=alert(1) autofocus>',
		'&lt;script&gt;alert(1)&lt;/script&gt;',
		'\u0000<scr\u0000ipt>\uFFFE\uD800',
		'https://example.org/"><script>x</script> www.example.org/<b>'
	])('comes out without foreign markup: %j', (source) => {
		for (const block of render(source).blocks) {
			if (block.kind === 'prose') expect(foreignMarkup(block.html)).toEqual([]);
		}
		for (const element of elementsOf(html(source))) expect(element.tagName).not.toBe('script');
	});

	it('of random pieces comes out without foreign markup, and its projection is what a page shows', () => {
		const piece = fc.constantFrom(
			...[
				'<script>',
				'<b onclick=x>',
				'</p>',
				'[a](javascript:x)',
				'[',
				'](',
				')',
				'![',
				'*',
				'**',
				'_',
				'`',
				'```\n',
				'~~',
				'\n',
				'\n\n',
				'> ',
				'- ',
				'1. ',
				'# '
			],
			...[
				':value[H_vap]',
				':value[',
				':figure[line]',
				'::table[readings]\n',
				'::figure[x]',
				':::a\n',
				':a',
				'10:30',
				']{',
				'}',
				'$',
				'$$\n',
				'\\frac{',
				'x^2',
				'\\',
				'&amp;',
				'&'
			],
			...[
				'[^1]',
				'\n[^1]: note\n',
				'| a | b |\n|--|--|\n',
				'word ',
				'\u{1F9EA}',
				'\t',
				'    ',
				'<!--',
				'-->',
				'http://a.b ',
				'\r\n',
				'\uFFFC',
				'- [ ] '
			]
		);
		fc.assert(
			fc.property(fc.array(piece, { maxLength: 40 }), (pieces) => {
				const source = pieces.join('');
				const projection = projectSection(source, known);
				const { blocks } = render(source);
				expect(blocks).toHaveLength(projection.blocks.length);
				const points = [...projection.text];
				blocks.forEach((block, index) => {
					const projected = projection.blocks[index];
					if (block.kind !== 'prose') return;
					expect(foreignMarkup(block.html)).toEqual([]);
					const text = points.slice(projected?.start, projected?.end).join('');
					expect(runsText(runTreeOf(nodesOf(block.html)))).toBe(text);
				});
				const prose = (position: number) => points[position];
				for (const link of projection.links) expect(prose(link.position)).toBe('\uFFFC');
			}),
			{ numRuns: 80, seed: 7 }
		);
	});

	it.each([
		'<img src=x onerror=alert(1)>',
		'<b class="a" onclick="x">1</b>',
		'</span></p><script>x</script>',
		'<span class="a>1</span>',
		'1 < 2'
	])('in the markup of a stored value is replaced by its text: %j', (markup) => {
		const value = quantity('H_vap', 1, null, 'K', '1 <i>K</i>');
		value.display.html = markup;
		value.display.speech = '<script>x</script>';
		const shown = { ...evaluation(), quantities: { H_vap: value } };
		const [block] = render('Is :value[H_vap].', shown).blocks;
		if (block?.kind !== 'prose') throw new Error('no block');
		expect(foreignMarkup(block.html)).toEqual([]);
		expect(block.html).toContain('1 &lt;i&gt;K&lt;/i&gt;');
		expect(elementsOf(block.html).map((element) => element.tagName)).toEqual(['p', 'span', 'span', 'span']);
	});
});

describe('excessive text', patience, () => {
	const n = 100_000;
	it.each([
		['a', 'a'.repeat(n)],
		['words', 'lorem ipsum '.repeat(n / 12)],
		['[', '['.repeat(n)],
		[']', ']'.repeat(n)],
		['*', '*a_ '.repeat(n / 4)],
		['`', '`a'.repeat(n / 2)],
		['<', '<'.repeat(n)],
		['$', '$a'.repeat(n / 2)],
		['>', '>'.repeat(n)],
		['- ', '- '.repeat(n / 2)],
		['links', '[a]('.repeat(n / 4)],
		['definitions', '[a]: b\n'.repeat(n / 7)],
		['directives', ':a['.repeat(n / 3)],
		['times', '10:30 '.repeat(n / 6)],
		['pipes', `${'|a'.repeat(n / 4)}\n${'|-'.repeat(n / 4)}`],
		['quotes by line', Array.from({ length: 400 }, (_, depth) => `${'>'.repeat(depth)} a`).join('\n')],
		['lists by line', Array.from({ length: 300 }, (_, depth) => `${' '.repeat(2 * depth)}- a`).join('\n')],
		['emphasis inside emphasis', `${'*a **b '.repeat(300)}${'** * '.repeat(300)}`]
	])('keeps all of it in reasonable time: %s', (_, source) => {
		const before = process.cpuUsage();
		const { blocks } = render(source);
		const { user } = process.cpuUsage(before);
		const letters = (text: string) => text.replace(/[^a-z]/g, '').length;
		const shown = blocks
			.map((block) => (block.kind === 'prose' ? runsText(runTreeOf(nodesOf(block.html))) : ''))
			.join('');
		if (!source.startsWith('[a]: b')) expect(letters(shown)).toBe(letters(source));
		for (const block of blocks) if (block.kind === 'prose') expect(foreignMarkup(block.html)).toEqual([]);
		expect(user / 1000).toBeLessThan(3_000);
		expect(statedValues(source)).toEqual([]);
	});

	it.each([
		[
			'doubling macros',
			'\\def\\a{xx}\\def\\b{\\a\\a}\\def\\c{\\b\\b}\\def\\d{\\c\\c}\\def\\e{\\d\\d}\\def\\f{\\e\\e}\\def\\g{\\f\\f}\\def\\h{\\g\\g}\\h\\h\\h'
		],
		['endless macro', '\\def\\a{\\a\\a}\\a'],
		['braces', '{'.repeat(1_900) + 'x' + '}'.repeat(1_900)],
		['fractions', '\\frac{1}{'.repeat(300) + '1' + '}'.repeat(300)],
		['long', 'x+'.repeat(3_000)],
		['large rule', '\\rule{99999em}{99999em}'],
		['far away', '\\kern{-99999em}x \\raisebox{9999em}{x}'],
		['far away by steps', '\\kern{-19em}'.repeat(60) + 'x'],
		['far up', '\\raisebox{-9999em}{x}'],
		['roots', '\\sqrt'.repeat(600) + 'x']
	])('formula: %s', (_, tex) => {
		const before = process.cpuUsage();
		const [block] = render(`$${tex}$`).blocks;
		if (block?.kind !== 'prose') throw new Error('no block');
		expect(foreignMarkup(block.html)).toEqual([]);
		expect(block.html.length).toBeLessThan(2_000_000);
		// maxSize: no length beyond 20 em that the writer chose.
		for (const [, size] of block.html.matchAll(/:-?(\d{3,})(?:\.\d+)?em/g))
			expect(Number(size)).toBeLessThan(100);
		expect(process.cpuUsage(before).user / 1000).toBeLessThan(3_000);
	});
});

describe('renderSection', () => {
	it('takes names of the language itself for unknown', () => {
		const names = ['__proto__', 'constructor', 'toString', 'hasOwnProperty'];
		for (const name of names) {
			const source = `:value[${name}]\n\n::figure[${name}]`;
			const { blocks } = renderSection(source, { evaluation: known, sectionNumber: 1 });
			expect(blocks[0]).toMatchObject({ kind: 'prose', values: [name] });
			expect(blocks[0]?.kind === 'prose' && blocks[0].html).toContain('unknown-link');
			expect(blocks[1]).toMatchObject({ kind: 'figure', name, known: false, label: 'Figure 1' });
		}
	});
});
