import { blockNumber, type Projection } from '$lib/reports';

/** What the words beneath a remark are underlined as. */
export type AnchorKind = 'correct' | 'question' | 'note' | 'well-done' | 'stated';

interface AnchorLook {
	/** of the remark; its first words get the element id `anchorId(id)` */
	id: string;
	kind: AnchorKind;
	/** the remark in hand */
	chosen?: boolean;
	/** element id of the margin entry that talks about it */
	entry?: string;
}

/** Words of a section, code points of its projection. */
export interface SectionAnchor extends AnchorLook {
	/** position of the section, from 1 */
	section: number;
	start: number;
	end: number;
}

/** What of an anchor lies in one block. `start` and `end` are null for a figure, table or step as a whole. */
export interface BlockAnchor extends AnchorLook {
	/** '3.1' */
	block: string;
	/** code points from the start of the block's own text */
	start: number | null;
	end: number | null;
	/** an earlier block has the first words */
	continued?: boolean;
}

export const anchorId = (remark: string): string => `words-${remark}`;

/** Spreads an anchor over the blocks that it touches. */
export function blockAnchors(anchor: SectionAnchor, projection: Projection): BlockAnchor[] {
	const { section, start, end, ...look } = anchor;
	return projection.blocks
		.filter((block) => block.start < end && block.end > start)
		.map((block, index) => ({
			...look,
			block: blockNumber(section, block),
			start: block.kind === 'prose' ? Math.max(0, start - block.start) : null,
			end: block.kind === 'prose' ? Math.min(end, block.end) - block.start : null,
			...(index > 0 && { continued: true })
		}));
}
