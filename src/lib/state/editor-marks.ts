import type { Range } from '@codemirror/state';
import {
	Decoration,
	ViewPlugin,
	type DecorationSet,
	type EditorView,
	type ViewUpdate
} from '@codemirror/view';

/** A stretch of a line and how it looks. */
export interface MarkedStretch {
	from: number;
	to: number;
	look: 'quiet' | 'strong' | 'slanted' | 'formula' | 'link' | 'heading';
}

interface Rule {
	pattern: RegExp;
	/** of the whole match, beside quiet marks of this many units at each end */
	look: MarkedStretch['look'];
	marks: number;
}

const rules: Rule[] = [
	{ pattern: /`[^`]+`/g, look: 'formula', marks: 1 },
	{ pattern: /\$\$[^$]+\$\$/g, look: 'formula', marks: 2 },
	{ pattern: /\$[^$\s](?:[^$]*[^$\s])?\$/g, look: 'formula', marks: 1 },
	{ pattern: /:{1,2}(?:value|figure|table|workings|comparison)\[[^\]]*\]/g, look: 'link', marks: 0 },
	{ pattern: /\*\*[^*]+\*\*/g, look: 'strong', marks: 2 },
	{ pattern: /(?<![*\w])\*[^*\s](?:[^*]*[^*\s])?\*(?!\*)/g, look: 'slanted', marks: 1 }
];

/**
 * What of a line of Markdown is markup: enough to read one's own text by, not a parser. What is drawn comes from the
 * report's own reading of it.
 */
export function markLine(text: string): MarkedStretch[] {
	const stretches: MarkedStretch[] = [];
	const heading = /^#{1,6}\s/.exec(text);
	if (heading) {
		stretches.push({ from: 0, to: heading[0].length, look: 'quiet' });
		stretches.push({ from: heading[0].length, to: text.length, look: 'heading' });
	}
	const lead = /^\s*(?:[-*+]|\d+[.)]|>)\s/.exec(text);
	if (lead) stretches.push({ from: 0, to: lead[0].length, look: 'quiet' });
	const taken: [number, number][] = [];
	for (const { pattern, look, marks } of rules) {
		for (const match of text.matchAll(pattern)) {
			const from = match.index;
			const to = from + match[0].length;
			if (taken.some(([start, end]) => from < end && to > start)) continue;
			taken.push([from, to]);
			if (marks > 0) {
				stretches.push({ from, to: from + marks, look: 'quiet' });
				stretches.push({ from: to - marks, to, look: 'quiet' });
			}
			stretches.push({ from: from + marks, to: to - marks, look });
		}
	}
	return stretches.filter(({ from, to }) => to > from);
}

const looks: Record<MarkedStretch['look'], Decoration> = {
	quiet: Decoration.mark({ class: 'mk-quiet' }),
	strong: Decoration.mark({ class: 'mk-strong' }),
	slanted: Decoration.mark({ class: 'mk-slanted' }),
	formula: Decoration.mark({ class: 'mk-formula' }),
	link: Decoration.mark({ class: 'mk-link' }),
	heading: Decoration.mark({ class: 'mk-heading' })
};

function decorate(view: EditorView): DecorationSet {
	const ranges: Range<Decoration>[] = [];
	for (const visible of view.visibleRanges) {
		for (let at = visible.from; at <= visible.to;) {
			const line = view.state.doc.lineAt(at);
			for (const { from, to, look } of markLine(line.text)) {
				ranges.push(looks[look].range(line.from + from, line.from + to));
			}
			at = line.to + 1;
		}
	}
	return Decoration.set(ranges, true);
}

export const quietMarks = ViewPlugin.fromClass(
	class {
		decorations: DecorationSet;
		constructor(view: EditorView) {
			this.decorations = decorate(view);
		}
		update(update: ViewUpdate): void {
			if (update.docChanged || update.viewportChanged) this.decorations = decorate(update.view);
		}
	},
	{ decorations: (plugin) => plugin.decorations }
);
