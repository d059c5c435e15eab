import type { RenderedBlock, RenderedSection } from '$lib/reports';

/** What the sheet is for at the moment; margins and offers differ, the page does not. */
export type ReportMode = 'writing' | 'marking' | 'returned';

/** One section of a report, ready to be drawn. `position` counts from 1 and is the number of the section: 3 has blocks 3.1, 3.2 ... */
export interface ReportSection {
	position: number;
	key: string;
	title: string;
	owner: 'author' | 'team';
	rendered: RenderedSection;
}

/** Element id of a section: what the scale's links and the skip links name. */
export const sectionId = (position: number): string => `s-${position}`;

/** The blocks of all sections in reading order. */
export const blocksOf = (sections: readonly ReportSection[]): RenderedBlock[] =>
	sections.flatMap((section) => section.rendered.blocks);
