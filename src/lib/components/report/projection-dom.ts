import {
	offsetToPlace,
	runsLength,
	runsToOffset,
	type Projection,
	type RunTree,
	type TreePlace
} from '$lib/reports';

/** A selection in terms of the report: code points of the section's projection. */
export interface SelectedWords {
	/** position of the section, from 1 */
	section: number;
	start: number;
	end: number;
	/** '3.1': the block in which it begins */
	block: string;
}

/** The runs of a block, from its element in the page; the rule stands at RunTree. */
export function runTreeOf(node: Node): RunTree {
	if (node.nodeType === Node.TEXT_NODE) return { text: node.nodeValue ?? '' };
	if (node.nodeType !== Node.ELEMENT_NODE) return { text: '' };
	const run = (node as Element).getAttribute('data-run');
	return run === null ? { children: [...node.childNodes].map(runTreeOf) } : { atom: run };
}

/**
 * What of the report is selected inside `root`; null when nothing is. A selection over several sections is cut at the
 * end of the first: a remark talks about one section.
 */
export function selectedWords(
	root: HTMLElement,
	selection: Selection | null,
	projectionOf: (section: number) => Projection | undefined
): SelectedWords | null {
	if (!selection || selection.rangeCount === 0 || selection.isCollapsed) return null;
	const range = selection.getRangeAt(0);
	const touched = blockElements(root).filter((element) => range.intersectsNode(element));
	const first = touched[0];
	if (!first) return null;
	const section = Number(first.dataset['section']);
	const last = touched.filter((element) => Number(element.dataset['section']) === section).at(-1) ?? first;
	const projection = projectionOf(section);
	if (!projection) return null;
	const start = offsetIn(first, projection, range.startContainer, range.startOffset, 'start');
	const end = offsetIn(last, projection, range.endContainer, range.endOffset, 'end');
	if (start === null || end === null || end <= start) return null;
	return { section, start, end, block: first.dataset['block'] ?? '' };
}

/** Ranges of the page that show a stretch of a section: one for each block that it touches. */
export function rangesOf(
	root: HTMLElement,
	section: number,
	words: { start: number; end: number },
	projection: Projection
): Range[] {
	const elements = blockElements(root).filter((element) => Number(element.dataset['section']) === section);
	const ranges: Range[] = [];
	for (const block of projection.blocks) {
		const element = elements.find((candidate) => indexOf(candidate) === block.index);
		if (!element || block.end <= words.start || block.start >= words.end) continue;
		const range = document.createRange();
		if (block.kind === 'prose') {
			const tree = runTreeOf(element);
			const from = offsetToPlace(tree, Math.max(0, words.start - block.start), 'start');
			const to = offsetToPlace(tree, Math.min(words.end, block.end) - block.start, 'end');
			range.setStart(...boundaryOf(element, from));
			range.setEnd(...boundaryOf(element, to));
		} else range.selectNodeContents(element);
		ranges.push(range);
	}
	return ranges;
}

const blockElements = (root: HTMLElement): HTMLElement[] => [
	...root.querySelectorAll<HTMLElement>('[data-block][data-section]')
];

/** '3.1' is the block with index 0 of its section. */
const indexOf = (element: HTMLElement): number => Number(element.dataset['block']?.split('.')[1]) - 1;

function offsetIn(
	element: HTMLElement,
	projection: Projection,
	container: Node,
	offset: number,
	edge: 'start' | 'end'
): number | null {
	const block = projection.blocks[indexOf(element)];
	if (!block) return null;
	// What is drawn from the workings is one character; a boundary outside means the block from or to its edge.
	if (block.kind !== 'prose' || !element.contains(container))
		return edge === 'start' ? block.start : block.end;
	const tree = runTreeOf(element);
	const within = runsToOffset(tree, { path: pathTo(element, container), offset }, edge);
	return block.start + Math.min(within, runsLength(tree));
}

function pathTo(root: Node, node: Node): number[] {
	const path: number[] = [];
	for (let here = node; here !== root && here.parentNode; here = here.parentNode) {
		path.unshift([...here.parentNode.childNodes].indexOf(here as ChildNode));
	}
	return path;
}

function boundaryOf(root: Node, place: TreePlace): [Node, number] {
	let here: Node = root;
	for (const index of place.path) here = here.childNodes[index] ?? here;
	return [here, place.offset];
}
