import type { Root as HastRoot, RootContent } from 'hast';
import type { Evaluation } from '$lib/worksheets';
import { composeSection, type ComposedBlock } from './compose';
import { linkableValues, objectCharacter, placedLabel } from './links';
import { countPoints } from './points';
import { runsLength, runsOf, runsText } from './runs';
import type { LinkKind } from './types';

/** Raised whenever the same source would project to other text. Stored with every anchor. */
export const projectionVersion = 1;

export interface ProjectedBlock {
	/** position among the section's blocks from 0: block 3.1 is 0 */
	index: number;
	kind: ComposedBlock['kind'];
	/** name of what is placed, null for prose */
	name: string | null;
	/** range in the projection, code points */
	start: number;
	end: number;
	/** range in the source, UTF-16 units */
	sourceStart: number;
	sourceEnd: number;
}

export interface ProjectedLink {
	/** of its U+FFFC, code points */
	position: number;
	kind: LinkKind;
	name: string;
	/** what stood there when the projection was made, null when the name was unknown */
	shown: string | null;
}

/**
 * What a reader reads of a section, as plain text: the text of each block, blocks joined by U+000A. A link is
 * U+FFFC with its name in `links`; a formula is its TeX source. The text depends on the source alone, never on the
 * values, so that a remark keeps its place when a reading is amended.
 */
export interface Projection {
	version: typeof projectionVersion;
	text: string;
	/** code points in `text` */
	length: number;
	blocks: ProjectedBlock[];
	links: ProjectedLink[];
}

export function projectSection(source: string, evaluation: Evaluation | null = null): Projection {
	const blocks: ProjectedBlock[] = [];
	const links: ProjectedLink[] = [];
	const texts: string[] = [];
	let start = 0;
	composeSection(source).forEach((block, index) => {
		const text = block.kind === 'prose' ? runsText(runsOf(block.tree)) : objectCharacter;
		const placed = block.kind === 'prose' ? block.links : [{ kind: block.kind, name: block.name }];
		for (const [order, position] of linkPositions(block).entries()) {
			const link = placed[order];
			if (link)
				links.push({ position: start + position, ...link, shown: shownAs(link.kind, link.name, evaluation) });
		}
		const end = start + countPoints(text);
		const name = block.kind === 'prose' ? null : block.name;
		blocks.push({
			index,
			kind: block.kind,
			name,
			start,
			end,
			sourceStart: block.start,
			sourceEnd: block.end
		});
		texts.push(text);
		start = end + 1;
	});
	const text = texts.join('\n');
	return { version: projectionVersion, text, length: countPoints(text), blocks, links };
}

/** The block that holds a position; the joint after a block belongs to it. */
export function blockAt(projection: Projection, position: number): ProjectedBlock | null {
	return (
		projection.blocks.find((block) => position >= block.start && position <= block.end) ??
		projection.blocks[projection.blocks.length - 1] ??
		null
	);
}

/** '3.1' */
export function blockNumber(sectionNumber: number, block: Pick<ProjectedBlock, 'index'>): string {
	return `${sectionNumber}.${block.index + 1}`;
}

/** Positions of the links' characters inside a block. A U+FFFC that the writer typed is not one of them. */
function linkPositions(block: ComposedBlock): number[] {
	if (block.kind !== 'prose') return [0];
	const positions: number[] = [];
	let before = 0;
	const visit = (node: HastRoot | RootContent): void => {
		const isLink = node.type === 'element' && node.properties.dataName !== undefined;
		if (isLink) positions.push(before);
		if (!isLink && 'children' in node && node.children.length > 0) node.children.forEach(visit);
		else before += runsLength(runsOf(node));
	};
	if (block.links.length > 0) visit(block.tree);
	return positions;
}

function shownAs(kind: LinkKind, name: string, evaluation: Evaluation | null): string | null {
	if (evaluation === null) return null;
	if (kind === 'value') return linkableValues(evaluation).get(name)?.display.text ?? null;
	return placedLabel(kind, undefined);
}
