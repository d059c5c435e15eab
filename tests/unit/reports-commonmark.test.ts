import { tests as examples } from 'commonmark-spec';
import { describe, expect, it } from 'vitest';
import { renderSection } from '$lib/reports';
import { foreignMarkup, normalised } from './reports-fixture';

// CommonMark 0.31.2, every example of the specification (npm commonmark-spec; its arrows stand for tabs).
const rendered = examples.map((example) => {
	const markdown = example.markdown.replaceAll('→', '\t');
	const html = renderSection(markdown, { evaluation: null, sectionNumber: 1 })
		.blocks.map((block) => (block.kind === 'prose' ? block.html : ''))
		.join('\n');
	return { ...example, html, expected: example.html.replaceAll('→', '\t') };
});

/** Headings stand two levels lower in a report, outside addresses carry `rel`; nothing else is evened out. */
function agrees({ html, expected }: { html: string; expected: string }): boolean {
	const lowered = expected.replace(
		/<(\/?)h([1-6])>/g,
		(_, close: string, depth: string) => `<${close}h${Math.min(6, Number(depth) + 2)}>`
	);
	return (
		normalised(html.replaceAll(' rel="nofollow noopener noreferrer"', '')).trim() ===
		normalised(lowered).trim()
	);
}

/** Where a report differs from CommonMark on purpose. */
const different = {
	// Two sections of the specification, and single examples elsewhere: HTML stands there as it was typed.
	rawHtml: [
		...rendered.filter(({ section }) => section === 'HTML blocks').map(({ number }) => number),
		...[21, 31, 201, 308, 309, 344, 475, 476, 477, 491, 494, 524, 536],
		...[613, 614, 615, 616, 617, 623, 625, 626, 627, 628, 629, 630, 631, 642, 643]
	],
	// Pictures come from the report's own files; the words say so.
	pictures: [
		517,
		520,
		531,
		...rendered
			.filter(({ section, number }) => section === 'Images' && number !== 590 && number < 592)
			.map(({ number }) => number)
	],
	// Only web and mail addresses are links.
	schemes: [500, 596, 597, 598, 599, 601],
	// GitHub's extension links bare addresses.
	bareAddresses: [602, 606, 608, 611, 612]
};

describe('CommonMark', () => {
	it('has all 652 examples', () => {
		expect(examples).toHaveLength(652);
	});

	it('lets no raw HTML, script or handler through in any of them', () => {
		const found = rendered.flatMap(({ number, html }) =>
			foreignMarkup(html).map((what) => `${number}: ${what}`)
		);
		expect(found).toEqual([]);
	});

	it('is followed in all examples but those that a report treats differently on purpose', () => {
		const onPurpose = Object.values(different)
			.flat()
			.sort((a, b) => a - b);
		const differing = rendered.filter((example) => !agrees(example)).map(({ number }) => number);
		expect(differing).toEqual(onPurpose);
		expect(rendered.length - differing.length).toBe(547);
	});

	it('shows raw HTML as the text it is, so that nothing typed is lost', () => {
		const inlineTags = rendered.filter(({ number }) => [475, 476, 477, 613, 614].includes(number));
		for (const { markdown, html } of inlineTags) {
			const tag = /<[a-z][^>]*>/i.exec(markdown)?.[0] ?? '';
			expect(tag).not.toBe('');
			expect(html.replaceAll('&#x3C;', '<').replaceAll('&#x26;', '&')).toContain(tag.split('\n')[0]);
		}
	});
});
