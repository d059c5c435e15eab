import { anchorId, type BlockAnchor } from './anchors';

/** Elements without a closing tag in the markup of reports. */
const childless = new Set(['br', 'hr', 'img', 'wbr']);

const piece =
	/<\/([a-z][a-z0-9-]*)\s*>|<([a-z][a-z0-9-]*)((?:\s+[^\s"'<>/=]+(?:\s*=\s*(?:"[^"]*"|'[^']*'|[^\s"'=<>`]+))?)*)\s*\/?>|[^<]+|</giu;
const character = /&(?:#\d+|#x[0-9a-f]+|[a-z][a-z0-9]*);|[^]/giu;
const runAttribute = /\sdata-run=(?:"([^"]*)"|'([^']*)'|([^\s"'=<>`]+))/u;

type WordsAnchor = BlockAnchor & { start: number; end: number };

/**
 * Wraps the anchored words of a block's markup in `<mark>`: on the server as well, so that they are there in print and
 * without scripts. Counts code points of the block's text, in which an element with `data-run` is its run and nothing
 * of its inside. Anchors may overlap; a run is marked as a whole when any part of it is.
 */
export function markHtml(html: string, anchors: readonly BlockAnchor[]): string {
	const words = anchors.filter(
		(anchor): anchor is WordsAnchor => anchor.start !== null && anchor.end !== null
	);
	if (words.length === 0) return html;
	const begun = new Set<string>();
	let marked = '';
	let position = 0;
	/** the run that is being passed over: its element's name, and how many of that name are open */
	let run: { tag: string; depth: number; close: string } | null = null;

	for (const [text, closing, opening, attributes = ''] of html.matchAll(piece)) {
		if (run) {
			marked += text;
			if (opening === run.tag) run.depth += 1;
			else if (closing === run.tag) run.depth -= 1;
			if (run.depth === 0) {
				marked += run.close;
				run = null;
			}
		} else if (opening !== undefined) {
			const value = runAttribute.exec(attributes);
			if (value && !childless.has(opening)) {
				const length = count(value[1] ?? value[2] ?? value[3] ?? '');
				const over = words.filter((anchor) => anchor.start < position + length && anchor.end > position);
				// A formula on lines of its own cannot stand inside a mark, which is a phrase.
				const open = opening === 'div' ? '' : over.map((anchor) => openMark(anchor, begun)).join('');
				marked += open + text;
				run = { tag: opening, depth: 1, close: open === '' ? '' : '</mark>'.repeat(over.length) };
				position += length;
			} else marked += text;
		} else if (closing !== undefined) {
			marked += text;
		} else {
			marked += markText(text, position, words, begun);
			position += count(text);
		}
	}
	return marked;
}

/** One stretch of text between tags. White space between the rows of a list or table stays bare. */
function markText(text: string, from: number, anchors: readonly WordsAnchor[], begun: Set<string>): string {
	const near = anchors.filter((anchor) => anchor.end > from);
	if (near.length === 0 || (text.includes('\n') && text.trim() === '')) return text;
	let marked = '';
	let current: WordsAnchor[] = [];
	let position = from;
	for (const [point] of text.matchAll(character)) {
		const here = near.filter((anchor) => anchor.start <= position && anchor.end > position);
		if (here.length !== current.length || here.some((anchor, index) => anchor !== current[index])) {
			marked += '</mark>'.repeat(current.length);
			marked += here.map((anchor) => openMark(anchor, begun)).join('');
			current = here;
		}
		marked += point;
		position += 1;
	}
	return marked + '</mark>'.repeat(current.length);
}

function openMark(anchor: WordsAnchor, begun: Set<string>): string {
	const id = begun.has(anchor.id) || anchor.continued ? '' : ` id="${escaped(anchorId(anchor.id))}"`;
	begun.add(anchor.id);
	const entry = anchor.entry ? ` aria-details="${escaped(anchor.entry)}"` : '';
	const chosen = anchor.chosen ? ' data-chosen="true"' : '';
	return `<mark${id} class="kind-${anchor.kind}" data-anchor="${escaped(anchor.id)}"${entry}${chosen}>`;
}

const escaped = (text: string): string =>
	text.replaceAll('&', '&amp;').replaceAll('"', '&quot;').replaceAll('<', '&lt;');

/** Code points, a character reference being one. */
function count(text: string): number {
	return text.match(character)?.length ?? 0;
}
