import type { Element, Root as HastRoot, RootContent } from 'hast';
import { countPoints, pointOffset, unitOffset } from './points';

/**
 * The text of a block as the projection counts it, in the shape of the page's own nodes: one entry for each child
 * node, in order, so that a path of child indexes means the same here and in the page.
 *
 * Made from the page by one rule: a text node is its text; an element with a `data-run` attribute is that
 * attribute as an atom, whatever it holds (links, formulas); any other element is its children; everything else
 * (comments) is the text ''.
 */
export type RunTree = { text: string } | { atom: string } | { children: RunTree[] };

/** A boundary point of a selection: child indexes from the block's element, then what the page calls the offset. */
export interface TreePlace {
	path: number[];
	/** in a text node UTF-16 units, in an element the number of children before */
	offset: number;
}

/** Length in code points. */
export function runsLength(tree: RunTree): number {
	if ('text' in tree) return countPoints(tree.text);
	if ('atom' in tree) return countPoints(tree.atom);
	return tree.children.reduce((sum, child) => sum + runsLength(child), 0);
}

export function runsText(tree: RunTree): string {
	if ('text' in tree) return tree.text;
	if ('atom' in tree) return tree.atom;
	return tree.children.map(runsText).join('');
}

/**
 * Code points from the start of the block to a boundary point. A place inside an atom moves to the atom's `edge`,
 * so that a selection that begins or ends inside a link or formula takes it whole.
 */
export function runsToOffset(tree: RunTree, place: TreePlace, edge: 'start' | 'end'): number {
	let here = tree;
	let before = 0;
	for (const index of place.path) {
		if (!('children' in here)) break;
		const children: RunTree[] = here.children;
		for (const child of children.slice(0, index)) before += runsLength(child);
		const next = children[index];
		if (next === undefined) return before;
		here = next;
	}
	if ('text' in here) return before + pointOffset(here.text, place.offset);
	if ('atom' in here) return before + (edge === 'start' ? 0 : countPoints(here.atom));
	return here.children.slice(0, place.offset).reduce((sum, child) => sum + runsLength(child), before);
}

/**
 * The boundary point at `offset` code points: for drawing a remark's underline. At a border between runs a 'start'
 * goes to the run that follows and an 'end' to the run before. Atoms are stepped around: the place is then in the parent.
 */
export function offsetToPlace(tree: RunTree, offset: number, edge: 'start' | 'end'): TreePlace {
	let here = tree;
	let left = Math.max(0, Math.min(offset, runsLength(tree)));
	const path: number[] = [];
	while ('children' in here) {
		const children: RunTree[] = here.children;
		const index = children.findIndex((child) => {
			const length = runsLength(child);
			if (edge === 'start' ? left < length : left <= length && length > 0) return true;
			left -= length;
			return false;
		});
		const next = children[index];
		if (next === undefined) return { path, offset: children.length };
		if ('atom' in next) return { path, offset: edge === 'end' && left > 0 ? index + 1 : index };
		path.push(index);
		here = next;
	}
	return { path, offset: 'text' in here ? unitOffset(here.text, left) : 0 };
}

/** The runs of a composed block, which are those of its markup in the page. */
export function runsOf(node: HastRoot | RootContent): RunTree {
	if (node.type === 'text') return { text: node.value };
	if (node.type === 'element') {
		const run = node.properties.dataRun;
		return typeof run === 'string' ? { atom: run } : { children: childRuns(node) };
	}
	return node.type === 'root' ? { children: childRuns(node) } : { text: '' };
}

function childRuns(parent: HastRoot | Element): RunTree[] {
	return parent.children.map((child) => runsOf(child));
}
