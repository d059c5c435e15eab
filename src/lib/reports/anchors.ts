import search from 'approx-string-match';
import { objectCharacter } from './links';
import { countPoints, pointOffset, slicePoints, unitOffset } from './points';
import { blockAt, projectionVersion, type Projection } from './projection';
import type { PlacedKind } from './types';

// Selectors of the W3C Web Annotation Data Model (2017), positions in code points of a section's projection.
export interface TextQuoteSelector {
	type: 'TextQuoteSelector';
	exact: string;
	prefix: string;
	suffix: string;
}
export interface TextPositionSelector {
	type: 'TextPositionSelector';
	start: number;
	end: number;
}
/** A figure, table, calculation or comparison placed in the section: 'figure=line'. */
export interface FragmentSelector {
	type: 'FragmentSelector';
	value: string;
}
export type Selector = TextQuoteSelector | TextPositionSelector | FragmentSelector;

export interface Anchor {
	projection: number;
	selectors: Selector[];
	/** names behind the U+FFFC of the quote, in order */
	links: string[];
}

export type Attachment =
	| {
			/** how: at its place, by its words, by similar words or what stands around them, or by the name of what is placed */
			attached: 'position' | 'quote' | 'approximate' | 'fragment';
			start: number;
			end: number;
			/** position among the section's blocks */
			block: number;
			/** the words differ from those that were marked */
			changed: boolean;
	  }
	| { attached: 'lost'; sentence: string };

/** Code points kept on each side of a quote. */
const contextLength = 32;
/** Longest words tried approximately, and how far the words between a kept prefix and suffix may have grown. */
const longestApproximate = 2_000;

/** Anchor of a range of the projection. White space at its ends and joints between blocks are left out. null when nothing is left. */
export function describeSelection(projection: Projection, start: number, end: number): Anchor | null {
	const from = Math.max(0, Math.min(start, end));
	const to = Math.min(projection.length, Math.max(start, end));
	const raw = slicePoints(projection.text, from, to);
	const exact = raw.trim();
	if (exact === '') return null;
	const first = from + countPoints(raw.slice(0, raw.length - raw.trimStart().length));
	const last = first + countPoints(exact);
	const position: TextPositionSelector = { type: 'TextPositionSelector', start: first, end: last };
	const placed = projection.blocks.find(
		(block) => block.name !== null && block.start === first && block.end === last
	);
	if (placed?.name !== undefined && placed.name !== null) {
		const fragment: FragmentSelector = { type: 'FragmentSelector', value: `${placed.kind}=${placed.name}` };
		return { projection: projectionVersion, selectors: [fragment, position], links: [placed.name] };
	}
	const quote: TextQuoteSelector = {
		type: 'TextQuoteSelector',
		exact,
		prefix: slicePoints(projection.text, Math.max(0, first - contextLength), first),
		suffix: slicePoints(projection.text, last, last + contextLength)
	};
	return {
		projection: projectionVersion,
		selectors: [quote, position],
		links: linksWithin(projection, first, last)
	};
}

/** Anchor of a figure, table, calculation or comparison, wherever it stands. */
export function describePlaced(kind: PlacedKind, name: string): Anchor {
	return {
		projection: projectionVersion,
		selectors: [{ type: 'FragmentSelector', value: `${kind}=${name}` }],
		links: [name]
	};
}

/** Finds an anchor's place in a projection of the same or a later draft, or says that it could not. */
export function attach(anchor: Anchor, projection: Projection): Attachment {
	const fragment = anchor.selectors.find((selector) => selector.type === 'FragmentSelector');
	if (fragment) return attachFragment(fragment.value, projection);
	const quote = anchor.selectors.find((selector) => selector.type === 'TextQuoteSelector');
	const position = anchor.selectors.find((selector) => selector.type === 'TextPositionSelector') ?? null;
	if (!quote || quote.exact === '')
		return { attached: 'lost', sentence: 'This remark names no words of the section.' };
	const draft = new Draft(projection, quote, position?.start ?? 0, anchor.links);
	return (
		(position ? atPosition(draft, position) : null) ??
		byQuote(draft) ??
		bySimilarWords(draft) ??
		betweenContexts(draft) ?? {
			attached: 'lost',
			sentence: `The words "${shortened(quote.exact)}" are no longer in this section.`
		}
	);
}

/** A projection while one quote is looked for in it; offsets in UTF-16 units inside, code points outside. */
class Draft {
	readonly text: string;
	constructor(
		readonly projection: Projection,
		readonly quote: TextQuoteSelector,
		readonly wanted: number,
		private readonly links: string[]
	) {
		this.text = projection.text;
	}

	/** Units of agreement between what stands around a range and what stood around the quote. */
	contextScore(from: number, to: number): number {
		const { prefix, suffix } = this.quote;
		return commonEnd(this.text.slice(0, from), prefix) + commonStart(this.text.slice(to), suffix);
	}

	/** Agreement of at least this much makes a place certain: all there is, or half of one side. */
	get certainScore(): number {
		const { prefix, suffix } = this.quote;
		return Math.min(prefix.length + suffix.length, contextLength / 2);
	}

	hasSameLinks(from: number, to: number): boolean {
		const found = linksWithin(this.projection, pointOffset(this.text, from), pointOffset(this.text, to));
		return found.length === this.links.length && found.every((name, index) => name === this.links[index]);
	}

	found(attached: 'position' | 'quote' | 'approximate', from: number, to: number): Attachment {
		const start = pointOffset(this.text, from);
		const end = pointOffset(this.text, to);
		const block = blockAt(this.projection, start)?.index ?? 0;
		return {
			attached,
			start,
			end,
			block,
			changed: this.text.slice(from, to) !== this.quote.exact || !this.hasSameLinks(from, to)
		};
	}
}

function attachFragment(value: string, projection: Projection): Attachment {
	const separator = value.indexOf('=');
	const kind = value.slice(0, separator);
	const name = value.slice(separator + 1);
	const block = projection.blocks.find((candidate) => candidate.kind === kind && candidate.name === name);
	if (block)
		return { attached: 'fragment', start: block.start, end: block.end, block: block.index, changed: false };
	const noun = kind === 'workings' ? 'calculation' : kind;
	return { attached: 'lost', sentence: `The ${noun} ${name} is no longer in this section.` };
}

/** The same words at the same place, with all of what stood around them. */
function atPosition(draft: Draft, position: TextPositionSelector): Attachment | null {
	const from = unitOffset(draft.text, position.start);
	const to = unitOffset(draft.text, position.end);
	if (draft.text.slice(from, to) !== draft.quote.exact || !draft.hasSameLinks(from, to)) return null;
	const { prefix, suffix } = draft.quote;
	return draft.contextScore(from, to) === prefix.length + suffix.length
		? draft.found('position', from, to)
		: null;
}

/** The same words, there or elsewhere: where most of the surroundings agree, then the nearest. */
function byQuote(draft: Draft): Attachment | null {
	const { exact } = draft.quote;
	let best: { from: number; score: number; distance: number } | null = null;
	let places = 0;
	for (let from = draft.text.indexOf(exact); from !== -1; from = draft.text.indexOf(exact, from + 1)) {
		if (!draft.hasSameLinks(from, from + exact.length)) continue;
		places += 1;
		const score = draft.contextScore(from, from + exact.length);
		const distance = Math.abs(pointOffset(draft.text, from) - draft.wanted);
		if (!best || score > best.score || (score === best.score && distance < best.distance)) {
			best = { from, score, distance };
		}
	}
	if (!best) return null;
	const to = best.from + exact.length;
	const isCertain = best.score >= draft.certainScore || (places === 1 && exact.length >= contextLength);
	if (isCertain) return draft.found(best.distance === 0 ? 'position' : 'quote', best.from, to);
	// A short word that stands in several places with other surroundings says nothing about which was meant.
	const isTelling = exact.length >= 12 && (places === 1 || best.score >= 4);
	return isTelling ? draft.found('approximate', best.from, to) : null;
}

/** Words that changed by at most a quarter; for short ones the surroundings have to agree. */
function bySimilarWords(draft: Draft): Attachment | null {
	const { exact } = draft.quote;
	const allowed = Math.floor(exact.length / 4);
	if (allowed === 0 || exact.length > longestApproximate) return null;
	let best: { from: number; to: number; cost: number } | null = null;
	for (const match of search(draft.text, exact, allowed)) {
		const score = draft.contextScore(match.start, match.end);
		if (exact.length < 20 && score < draft.certainScore) continue;
		const distance =
			Math.abs(pointOffset(draft.text, match.start) - draft.wanted) / Math.max(1, draft.text.length);
		const cost = match.errors / exact.length - score / (4 * contextLength) + distance / 10;
		if (!best || cost < best.cost) best = { from: match.start, to: match.end, cost };
	}
	if (!best) return null;
	return draft.found('approximate', wholeStart(draft.text, best.from), wholeEnd(draft.text, best.to));
}

/** Words rewritten altogether, when what stood on both sides still does. */
function betweenContexts(draft: Draft): Attachment | null {
	const { prefix, suffix, exact } = draft.quote;
	const before = prefix.slice(-contextLength / 2);
	const after = suffix.slice(0, contextLength / 2);
	if (before.trim().length < 8 || after.trim().length < 8) return null;
	const reach = 2 * exact.length + 40;
	let best: { from: number; to: number; distance: number } | null = null;
	for (let at = draft.text.indexOf(before); at !== -1; at = draft.text.indexOf(before, at + 1)) {
		const from = at + before.length;
		const to = draft.text.indexOf(after, from);
		if (to <= from || to - from > reach || draft.text.slice(from, to).trim() === '') continue;
		const distance = Math.abs(pointOffset(draft.text, from) - draft.wanted);
		if (!best || distance < best.distance) best = { from, to, distance };
	}
	return best ? draft.found('approximate', best.from, best.to) : null;
}

function linksWithin(projection: Projection, start: number, end: number): string[] {
	return projection.links
		.filter((link) => link.position >= start && link.position < end)
		.map((link) => link.name);
}

function commonEnd(a: string, b: string): number {
	let length = 0;
	while (length < a.length && length < b.length && a[a.length - 1 - length] === b[b.length - 1 - length])
		length += 1;
	return length;
}

function commonStart(a: string, b: string): number {
	let length = 0;
	while (length < a.length && length < b.length && a[length] === b[length]) length += 1;
	return length;
}

/** Never half of a surrogate pair. */
function wholeStart(text: string, offset: number): number {
	return unitOffset(text, pointOffset(text, offset));
}

function wholeEnd(text: string, offset: number): number {
	const start = wholeStart(text, offset);
	return start === offset ? offset : unitOffset(text, pointOffset(text, offset) + 1);
}

function shortened(text: string): string {
	const plain = text.replaceAll(objectCharacter, '[link]').replace(/\s+/g, ' ');
	return countPoints(plain) <= 60 ? plain : `${slicePoints(plain, 0, 57)}...`;
}
