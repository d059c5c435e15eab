import type { Evaluation } from '$lib/worksheets';

/** What a report can link to. A value stands inside a sentence, the others on a line of their own. */
export type LinkKind = 'value' | 'figure' | 'table' | 'workings' | 'comparison';
export type PlacedKind = Exclude<LinkKind, 'value'>;

/** Numbers of what is placed in a report ("Figure 2"), in the order of first placement, for each kind by name. */
export type Numbering = Record<PlacedKind, Record<string, number>>;

export interface SectionContext {
	/** null while the readings have not been worked up */
	evaluation: Evaluation | null;
	/** 3 makes blocks 3.1, 3.2 ... */
	sectionNumber: number;
	/** of the whole report; by default the section's own placements are counted from 1 */
	numbering?: Numbering;
}

interface BlockPlace {
	/** '3.1' */
	number: string;
	/** unique in the report, for addresses: 'b-3-1' */
	id: string;
	/** range in the section's source, UTF-16 units */
	start: number;
	end: number;
}

/** Text of the writer: markup that holds nothing but what this module put there. */
export interface ProseBlock extends BlockPlace {
	kind: 'prose';
	html: string;
	/** names of the values linked inside, in order, known or not */
	values: string[];
}

/** A link on a line of its own: a component draws it. */
export interface PlacedBlock extends BlockPlace {
	kind: PlacedKind;
	name: string;
	known: boolean;
	/** 'Figure 2' */
	label: string;
	/** when not known: what there is instead */
	message: string | null;
	/** when not known: the name that was probably meant */
	nearest: string | null;
}

export type RenderedBlock = ProseBlock | PlacedBlock;

export interface RenderedSection {
	sectionNumber: number;
	blocks: RenderedBlock[];
}

/** One entry of the margin that speaks. `met` says whether the check holds. */
export interface Check {
	code: CheckCode;
	/** block number, null when it concerns the whole section */
	block: string | null;
	message: string;
	met: boolean;
}
export type CheckCode =
	| 'abstract-one-paragraph'
	| 'abstract-gives-values'
	| 'value-has-uncertainty'
	| 'figure-mentioned'
	| 'link-known';
