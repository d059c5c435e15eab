import type { Root } from 'mdast';
import remarkDirective from 'remark-directive';
import remarkGfm from 'remark-gfm';
import remarkMath from 'remark-math';
import remarkParse from 'remark-parse';
import { unified } from 'unified';

const parser = unified().use(remarkParse).use(remarkGfm).use(remarkMath).use(remarkDirective).freeze();

/** Longer sections stand as typed, without markup (UTF-16 units). */
const longestSource = 200_000;
/** Quotes and lists inside one another. Deeper ones are taken as typed: the parser's stack and time grow with them. */
const deepestNesting = 40;
/** An item that far in is inside as many lists, at two columns each. */
const deepItem = new RegExp(`^\\s{${2 * deepestNesting},}(?:[-*+]|\\d{1,9}[.)])(?:\\s|$)`);
/** Openings of links, emphasis and the like in one paragraph, beyond which the parser's time would grow with their square. */
const mostOpenings = 4_000;
const mostOpeningsInAll = 20_000;

/**
 * Parses a section. Text that would take unreasonable time or stack is left as typed, paragraph by paragraph,
 * so that nothing of it is lost and typing elsewhere goes on.
 */
export function parseMarkdown(source: string): Root {
	if (source.length <= longestSource && isReasonable(source)) {
		try {
			return parser.parse(source);
		} catch (problem) {
			if (!(problem instanceof RangeError)) throw problem;
		}
	}
	return asTyped(source);
}

function isReasonable(source: string): boolean {
	let openings = 0;
	let inAll = 0;
	for (const line of source.split('\n')) {
		if (deepItem.test(line)) return false;
		const lead = /^[\s>*+\-\d.)]*/.exec(line)?.[0] ?? '';
		if ((lead.match(/[>*+-]|\d[.)]/g)?.length ?? 0) > deepestNesting && !/^[\s*_-]{1,400}$/.test(line))
			return false;
		const inLine = line.match(/[[\]*_`<~$!&:{\\|]/g)?.length ?? 0;
		openings = line.trim() === '' ? 0 : openings + inLine;
		inAll += inLine;
		if (openings > mostOpenings || inAll > mostOpeningsInAll) return false;
	}
	return true;
}

function asTyped(source: string): Root {
	const root: Root = { type: 'root', children: [] };
	for (const match of source.matchAll(/[^\n]*\S[^\n]*(?:\n[^\n]*\S[^\n]*)*/g)) {
		const start = { line: 1, column: 1, offset: match.index };
		const end = { line: 1, column: 1, offset: match.index + match[0].length };
		root.children.push({
			type: 'paragraph',
			position: { start, end },
			children: [{ type: 'text', value: match[0], position: { start, end } }]
		});
	}
	return root;
}
