import type { Element, Root as HastRoot } from 'hast';
import type { Definition, Nodes, Parent, Root, RootContent } from 'mdast';
import rehypeSanitize, { type Options as Schema } from 'rehype-sanitize';
import remarkRehype from 'remark-rehype';
import { unified } from 'unified';
import { Lru } from './lru';
import { parseMarkdown } from './markdown';
import { mend, placedLink, type Mending } from './mend';
import { isPlacedKind } from './links';
import type { LinkKind, PlacedKind } from './types';

/** A block before values and formulas are put in. Depends on the source alone. */
export type ComposedBlock = ComposedProse | ComposedLink;
interface ComposedRange {
	/** in the section's source, UTF-16 units */
	start: number;
	end: number;
}
export interface ComposedProse extends ComposedRange {
	kind: 'prose';
	tree: HastRoot;
	/** mdast type: 'paragraph', 'heading', 'list', ... */
	type: string;
	links: { kind: LinkKind; name: string }[];
	/** differs whenever the tree does */
	key: string;
}
export interface ComposedLink extends ComposedRange {
	kind: PlacedKind;
	name: string;
}

/** Everything a report's markup may hold. What is not named here does not get through. */
const schema: Schema = {
	tagNames: [
		...['p', 'h3', 'h4', 'h5', 'h6', 'blockquote', 'ul', 'ol', 'li', 'pre', 'hr', 'div'],
		...['table', 'thead', 'tbody', 'tr', 'th', 'td'],
		...['a', 'strong', 'em', 'del', 'code', 'br', 'img', 'span', 'sup']
	],
	attributes: {
		a: ['href', 'title'],
		img: ['src', 'alt', 'title'],
		ol: ['start'],
		th: [['align', 'left', 'right', 'center']],
		td: [['align', 'left', 'right', 'center']],
		code: [['className', 'math-inline', 'math-display', /^language-./]],
		span: [
			['className', 'linked-value', 'cross-reference', 'note-number'],
			'dataKind',
			'dataName',
			'dataRun',
			'dataNote'
		],
		sup: [['className', 'note-mark'], 'dataNote', 'dataFirst'],
		div: [['className', 'note'], 'dataNote']
	},
	protocols: { href: ['http', 'https', 'mailto'], src: [] },
	ancestors: {},
	clobber: [],
	required: {},
	strip: ['script', 'style'],
	allowComments: false,
	allowDoctypes: false
};

const toMarkup = unified().use(remarkRehype).use(rehypeSanitize, schema).freeze();

// Memos of pure functions. Sections are read again at every key stroke by several functions, and most blocks stay as they are.
const sections = new Lru<ComposedBlock[]>(24);
const blocks = new Lru<{ tree: HastRoot; links: ComposedProse['links'] }>(1_000);

/** The blocks of a section in order. Definitions of links and blank text are no blocks. */
export function composeSection(source: string): ComposedBlock[] {
	return sections.take(source, () => compose(source));
}

function compose(source: string): ComposedBlock[] {
	const root = parseMarkdown(source);
	const definitions = definitionsIn(root);
	const definitionText = definitions.map((node) => sliceOf(node, source)).join('\n');
	const notes = numberNotes(root);
	const composed: ComposedBlock[] = [];
	for (const node of root.children) {
		if (node.type === 'definition') continue;
		const start = node.position?.start.offset ?? 0;
		const end = node.position?.end.offset ?? start;
		const placed = placedLink(node, source);
		if (placed && isPlacedKind(placed.kind)) {
			composed.push({ kind: placed.kind, name: placed.name, start, end });
			continue;
		}
		const text = source.slice(start, end);
		const usesNotes = text.includes('[^');
		const noteText = usesNotes ? JSON.stringify([...notes.numbers, notes.seenBefore.get(node) ?? []]) : '';
		// Indented code differs from a paragraph by what precedes it, so the type belongs to the key.
		const key = [node.type, noteText, text.includes('[') ? definitionText : '', text].join('\u0000');
		const { tree, links } = blocks.take(key, () => {
			const seen = new Set(notes.seenBefore.get(node) ?? []);
			return markup(node, definitions, { source, notes: notes.numbers, seen });
		});
		composed.push({ kind: 'prose', type: node.type, tree, links, key, start, end });
	}
	return composed;
}

function markup(
	node: RootContent,
	definitions: Definition[],
	mending: Mending
): { tree: HastRoot; links: ComposedProse['links'] } {
	const root: Root = { type: 'root', children: [node] };
	try {
		mend(root, mending);
		root.children.push(...definitions);
		const tree = toMarkup.runSync(root);
		// Definitions leave line ends behind.
		while (isBlank(tree.children[tree.children.length - 1])) tree.children.pop();
		const links: ComposedProse['links'] = [];
		finish(tree, links);
		return { tree, links };
	} catch (problem) {
		if (!(problem instanceof RangeError)) throw problem;
		// Deeper than the stack: as typed.
		const start = node.position?.start.offset ?? 0;
		const value = mending.source.slice(start, node.position?.end.offset ?? start);
		const paragraph: Element = {
			type: 'element',
			tagName: 'p',
			properties: {},
			children: [{ type: 'text', value }]
		};
		return { tree: { type: 'root', children: [paragraph] }, links: [] };
	}
}

function isBlank(node: HastRoot['children'][number] | undefined): boolean {
	return node?.type === 'text' && node.value.trim() === '';
}

/** Makes formulas single runs, marks outside addresses, takes away refused ones, collects links. */
function finish(parent: HastRoot | Element, links: ComposedProse['links']): void {
	for (let index = 0; index < parent.children.length; index += 1) {
		const child = parent.children[index];
		// Sanitizing took an address that is neither a web nor a mail address: the words stay.
		if (child?.type === 'element' && child.tagName === 'a' && child.properties.href === undefined) {
			parent.children.splice(index, 1, ...child.children);
			index -= 1;
		}
	}
	parent.children.forEach((child, index) => {
		if (child.type === 'text') child.value = asBrowsersRead(child.value);
		if (child.type !== 'element') return;
		const formula = formulaOf(child);
		if (formula) {
			parent.children[index] = formula;
			return;
		}
		const { dataKind, dataName } = child.properties;
		if (child.tagName === 'span' && typeof dataKind === 'string' && typeof dataName === 'string') {
			links.push({
				kind: dataKind === 'value' || !isPlacedKind(dataKind) ? 'value' : dataKind,
				name: dataName
			});
		}
		if (child.tagName === 'a' && /^(?:https?:)?\/\//i.test(String(child.properties.href ?? ''))) {
			child.properties.rel = ['nofollow', 'noopener', 'noreferrer'];
		}
		finish(child, links);
	});
}

/** Browsers read CR LF and CR as LF; positions count what they show. */
function asBrowsersRead(text: string): string {
	return text.replace(/\r\n?/g, '\n').replaceAll('\u0000', '\uFFFD');
}

/** A formula is one run of the text: its TeX source. */
function formulaOf(element: Element): Element | null {
	const inner = element.tagName === 'pre' ? element.children[0] : element;
	if (inner?.type !== 'element' || inner.tagName !== 'code') return null;
	const classes = inner.properties.className;
	if (!Array.isArray(classes)) return null;
	const display = classes.includes('math-display');
	if (!display && !classes.includes('math-inline')) return null;
	const tex = inner.children
		.map((child) => (child.type === 'text' ? child.value : ''))
		.join('')
		.trim();
	return {
		type: 'element',
		tagName: display ? 'div' : 'span',
		properties: {
			className: display ? ['formula', 'formula-display'] : ['formula'],
			dataRun: asBrowsersRead(tex)
		},
		children: []
	};
}

/** Those inside quotes and lists too: they hold for the whole section. */
function definitionsIn(parent: Parent): Definition[] {
	return parent.children.flatMap((node): Definition[] => {
		if (node.type === 'definition') return [node];
		return 'children' in node ? definitionsIn(node) : [];
	});
}

interface Notes {
	numbers: Map<string, number>;
	/** identifiers already mentioned before each top-level node */
	seenBefore: Map<RootContent, string[]>;
}

/** Footnotes are numbered over the section, in the order of first mention. */
function numberNotes(root: Root): Notes {
	const numbers = new Map<string, number>();
	const seenBefore = new Map<RootContent, string[]>();
	const visit = (node: Nodes): void => {
		if (node.type === 'footnoteReference' && !numbers.has(node.identifier)) {
			numbers.set(node.identifier, numbers.size + 1);
		}
		if ('children' in node) node.children.forEach(visit);
	};
	for (const node of root.children) {
		seenBefore.set(node, [...numbers.keys()]);
		visit(node);
	}
	return { numbers, seenBefore };
}

function sliceOf(node: Nodes, source: string): string {
	return source.slice(node.position?.start.offset ?? 0, node.position?.end.offset ?? 0);
}
