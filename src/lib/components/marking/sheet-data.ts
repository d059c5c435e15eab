import type { MarkingState, RemarkAnchor, RemarkKind } from '$lib/contracts/marking';
import {
	attach,
	blockNumber,
	compareStated,
	describeSelection,
	numberPlacements,
	projectSection,
	renderSection,
	type Anchor,
	type Projection,
	type RenderedSection,
	type StatedLine
} from '$lib/reports';
import type { Evaluation, Readings } from '$lib/worksheets';

/** What the server gives of a report under marking. */
export interface SheetData {
	alias: string;
	label: string;
	title: string;
	edition: string;
	author: string | null;
	sections: SheetSection[];
	readings: Readings;
	evaluation: Evaluation;
	otherEngine: string | null;
	rubric: { title: string; criteria: SheetCriterion[] };
	marking: MarkingState | null;
	takenBy: string | null;
	returned: boolean;
	place: number;
	of: number;
	finished: number;
	next: { alias: string; label: string } | null;
}
export interface SheetSection {
	position: number;
	key: string;
	title: string;
	owner: 'author' | 'team';
	text: string;
}
/** Points in hundredths. */
export interface SheetCriterion {
	id: string;
	title: string;
	levels: { level: number; text: string; pointsHundredths: number }[];
}

/** A section as it is drawn. `position` counts from 1 and numbers its blocks. */
export interface DrawnSection {
	position: number;
	key: string;
	title: string;
	owner: 'author' | 'team';
	rendered: RenderedSection;
}

/** A report ready to be read: drawn sections, and their plain text for anchors. */
export interface ReadReport {
	sections: DrawnSection[];
	projections: Map<number, Projection>;
	/** words of the whole, section by section, for the scale */
	lengths: Map<number, number>;
}

export function readReport(sections: readonly SheetSection[], evaluation: Evaluation): ReadReport {
	const numbering = numberPlacements(sections.map((section) => section.text));
	return {
		sections: sections.map(({ position, key, title, owner, text }) => ({
			position,
			key,
			title,
			owner,
			rendered: renderSection(text, { evaluation, sectionNumber: position, numbering })
		})),
		projections: new Map(sections.map(({ position, text }) => [position, projectSection(text, evaluation)])),
		lengths: new Map(sections.map(({ position, text }) => [position, text.length]))
	};
}

/** How the words of a remark are underlined; stated values have a rule of their own. */
export type RemarkLook = 'correct' | 'question' | 'note' | 'well-done';
export type MarkLook = RemarkLook | 'stated';

export const kindWords: { kind: RemarkKind; word: string; look: RemarkLook }[] = [
	{ kind: 'to correct', word: 'To correct', look: 'correct' },
	{ kind: 'question', word: 'Question', look: 'question' },
	{ kind: 'note', word: 'Note', look: 'note' },
	{ kind: 'well done', word: 'Well done', look: 'well-done' }
];

export const lookOf = (kind: RemarkKind): RemarkLook =>
	kind === 'to correct' ? 'correct' : kind === 'well done' ? 'well-done' : kind;

/** Where a remark's words stand in the report; the section's first block when they cannot be found. */
export interface RemarkPlace {
	block: string;
	start: number;
	end: number;
	lost: boolean;
}

export function placeOf(anchor: RemarkAnchor | null, report: ReadReport): RemarkPlace {
	const section = anchor?.section ?? report.sections[0]?.position ?? 1;
	const projection = report.projections.get(section);
	const found = anchor && projection ? attach(anchor satisfies Anchor, projection) : null;
	if (!found || found.attached === 'lost')
		return { block: blockNumber(section, { index: 0 }), start: 0, end: 0, lost: true };
	return {
		block: blockNumber(section, { index: found.block }),
		start: found.start,
		end: found.end,
		lost: false
	};
}

/** Words to be marked, with the text they are counted in. */
export interface MarkedWords {
	anchor: {
		id: string;
		kind: MarkLook;
		section: number;
		start: number;
		end: number;
		chosen?: boolean;
		entry?: string;
	};
	projection: Projection;
}

/** None when the words are not there. */
export function markedWords(
	anchor: Omit<MarkedWords['anchor'], 'start' | 'end'>,
	{ start, end }: { start: number; end: number },
	report: ReadReport
): MarkedWords[] {
	const projection = report.projections.get(anchor.section);
	return projection && end > start ? [{ anchor: { ...anchor, start, end }, projection }] : [];
}

/** Anchor of selected words, as it is stored; null when only white space is selected. */
export function anchorOf(
	words: { section: number; start: number; end: number },
	report: ReadReport
): RemarkAnchor | null {
	const projection = report.projections.get(words.section);
	const anchor = projection ? describeSelection(projection, words.start, words.end) : null;
	return anchor
		? {
				section: words.section,
				projection: anchor.projection,
				selectors: anchor.selectors,
				links: anchor.links
			}
		: null;
}

/** One line of the lane, with the id of the words it is level with. */
export interface LaneValue extends StatedLine {
	id: string;
	section: number;
	/** '373.5(3), 2 u': without the unit, which the text has */
	departureText: string;
}

export function laneOf(sections: readonly SheetSection[], evaluation: Evaluation): LaneValue[] {
	return sections.flatMap(({ position, text }) =>
		compareStated(text, evaluation, position).map((line) => ({
			...line,
			id: `stated-${position}-${line.start}`,
			section: position,
			departureText: withoutUnit(line)
		}))
	);
}

/** The lane is 104 px wide: value and departure on one line, the unit left to the sentence. */
function withoutUnit({ recomputed, short }: StatedLine): string {
	if (short === '') return '';
	const number =
		/^[\u2212+-]?[\d.,]+(?:\(\d+\))?(?:\u2009?×\u2009?10\S*)?/u.exec(recomputed)?.[0] ?? recomputed;
	return `${number}${short.slice(recomputed.length)}`.replace(/[ \u2009]/gu, '\u00a0');
}

/** '30', '7.5': points from hundredths. */
export const pointsText = (hundredths: number): string => String(hundredths / 100);

/** Words quoted in the margin are cut where they are long. */
export function shortened(text: string, most = 48): string {
	const plain = text.replaceAll('\uFFFC', '…').replace(/\s+/g, ' ').trim();
	const points = [...plain];
	return points.length <= most ? plain : `${points.slice(0, most - 1).join('')}…`;
}
