import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { blockAnchors, type BlockAnchor } from '../../src/lib/components/report/anchors';
import { markHtml } from '../../src/lib/components/report/mark-html';
import { projectSection, renderSection } from '$lib/reports';

const source = [
	'The slope is *steep* & the **law** holds: $p = p_0 \\exp(-H/RT)$ gives :value[H_vap], see :figure[line].',
	'',
	'- first 😀 item',
	'- second `code <b>` item',
	'',
	'| a | b |',
	'| - | - |',
	'| 1 | 2 |',
	'',
	'$$\\int_0^1 x\\,dx$$',
	'',
	'::figure[line]',
	'',
	'A last line with a note.[^1]',
	'',
	'[^1]: The note.'
].join('\n');
const projection = projectSection(source);
const blocks = renderSection(source, { evaluation: null, sectionNumber: 2 }).blocks;
const points = [...projection.text];

/** Text that a page shows inside the marks of one anchor, runs given by their attribute. */
function markedText(html: string): string {
	let text = '';
	let depth = 0;
	let run: { tag: string; depth: number } | null = null;
	for (const [piece, closing, opening] of html.matchAll(
		/<\/([a-z0-9]+)>|<([a-z0-9]+)(?:"[^"]*"|[^">])*>|[^<]+/g
	)) {
		if (run) {
			if (opening === run.tag) run.depth += 1;
			if (closing === run.tag && (run.depth -= 1) === 0) run = null;
		} else if (closing === 'mark') depth -= 1;
		else if (opening === 'mark') depth += 1;
		else if (opening !== undefined) {
			const value = /data-run="([^"]*)"/.exec(piece)?.[1];
			if (value !== undefined) {
				if (depth > 0) text += value;
				run = { tag: opening, depth: 1 };
			}
		} else if (closing === undefined && depth > 0) text += piece;
	}
	return text
		.replaceAll('&#x3C;', '<')
		.replaceAll('&lt;', '<')
		.replaceAll('&#x26;', '&')
		.replaceAll('&amp;', '&');
}

const htmlOf = (number: string): string => {
	const block = blocks.find((candidate) => candidate.number === number);
	return block?.kind === 'prose' ? block.html : '';
};
const wordsAnchor = (start: number, end: number, extra: Partial<BlockAnchor> = {}): BlockAnchor => ({
	id: 'r1',
	kind: 'correct',
	block: '2.1',
	start,
	end,
	...extra
});

describe('marking words in markup', () => {
	it('marks the words, once with an id, over the borders of elements', () => {
		const html = markHtml('<p>one <em>two</em> three</p>', [wordsAnchor(2, 10, { entry: 'e1' })]);
		expect(html).toBe(
			'<p>on<mark id="words-r1" class="kind-correct" data-anchor="r1" aria-details="e1">e </mark>' +
				'<em><mark class="kind-correct" data-anchor="r1" aria-details="e1">two</mark></em>' +
				'<mark class="kind-correct" data-anchor="r1" aria-details="e1"> th</mark>ree</p>'
		);
	});

	it('marks a formula as a whole when a part of it is meant', () => {
		const html = markHtml('<p>a<span data-run="x^2"><i>x</i><span>2</span></span>b</p>', [wordsAnchor(2, 3)]);
		expect(html).toBe(
			'<p>a<mark id="words-r1" class="kind-correct" data-anchor="r1"><span data-run="x^2"><i>x</i><span>2</span></span></mark>b</p>'
		);
	});

	it('nests what overlaps', () => {
		const html = markHtml('<p>abcd</p>', [
			wordsAnchor(0, 3),
			wordsAnchor(1, 4, { id: 'r2', kind: 'question' })
		]);
		expect(html.replaceAll(/<mark[^>]*data-anchor="(r\d)"[^>]*>/g, '[$1 ')).toBe(
			'<p>[r1 a</mark>[r1 [r2 bc</mark></mark>[r2 d</mark></p>'
		);
	});

	it('finds in the markup exactly the words of the projection, for any range', () => {
		fc.assert(
			fc.property(fc.nat(points.length), fc.nat(points.length), (a, b) => {
				const [start, end] = [Math.min(a, b), Math.max(a, b)];
				for (const piece of blockAnchors({ id: 'r', kind: 'note', section: 2, start, end }, projection)) {
					if (piece.start === null || piece.end === null) continue;
					const block = projection.blocks[Number(piece.block.split('.')[1]) - 1];
					if (!block) throw new Error(`no block ${piece.block}`);
					const html = htmlOf(piece.block);
					const marked = markHtml(html, [piece]);
					const expected = points.slice(block.start + piece.start, block.start + piece.end).join('');
					const shown = markedText(marked);
					// Runs are marked whole and white space between rows is not, so the words lie inside what is shown.
					const bare = (text: string) => text.replaceAll(/\s/g, '');
					if (!html.includes('formula-display')) expect(bare(shown)).toContain(bare(expected));
					expect(marked.replaceAll(/<\/?mark[^>]*>/g, '')).toBe(html);
				}
			}),
			{ numRuns: 400 }
		);
	});
});
