import { composeSection } from './compose';
import { blockNumber, projectSection } from './projection';
import { runsOf, runsText } from './runs';

/** A section as an experiment asks for it. */
export interface OutlineEntry {
	key: string;
	title: string;
	owner: 'author' | 'team';
	/** what to write there, Markdown */
	guide: string;
}

export interface SectionNode extends OutlineEntry {
	/** from 1 */
	number: number;
	blocks: number;
	words: number;
	/** headings inside the section */
	headings: { block: string; text: string }[];
}

/** The sections of a report in order, with what each holds. Sections without text are there, empty. */
export function sectionTree(
	outline: readonly OutlineEntry[],
	sources: Readonly<Record<string, string>>
): SectionNode[] {
	return outline.map((entry, index) => {
		const number = index + 1;
		const source = Object.hasOwn(sources, entry.key) ? (sources[entry.key] ?? '') : '';
		const blocks = composeSection(source);
		return {
			...entry,
			number,
			blocks: blocks.length,
			words: countWords(projectSection(source).text),
			headings: blocks.flatMap((block, position) =>
				block.kind === 'prose' && block.type === 'heading'
					? [{ block: blockNumber(number, { index: position }), text: runsText(runsOf(block.tree)) }]
					: []
			)
		};
	});
}

/** Runs of letters and digits, with what joins them inside: "don't" and "41.6" are one word each. */
export function countWords(text: string): number {
	return text.match(/[\p{L}\p{N}]+(?:['’.,\-−][\p{L}\p{N}]+)*/gu)?.length ?? 0;
}
