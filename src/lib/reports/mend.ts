import type { BlockContent, Nodes, Parent, PhrasingContent, RootContent } from 'mdast';
import type { LeafDirective, TextDirective } from 'mdast-util-directive';
import { isPlacedKind, objectCharacter } from './links';

/** Files of the report itself: the only pictures that are shown. */
const ownFile = /^\/api\/v1\/files\/[0-9a-f-]{36}$/;

export interface Mending {
	source: string;
	/** number of each footnote of the section by its identifier */
	notes: ReadonlyMap<string, number>;
	/** footnotes mentioned so far; grows while mending */
	seen: Set<string>;
}

/** The block link that a top-level node is, if it is one. */
export function placedLink(node: RootContent, source: string): { kind: string; name: string } | null {
	if (node.type !== 'leafDirective' || !isPlacedKind(node.name)) return null;
	return { kind: node.name, name: labelOf(node, source) };
}

/**
 * Turns what a report does not have back into the text it was typed as (raw HTML, unknown directives, pictures from
 * elsewhere), links into placeholders and footnotes into our own numbering. Works in place.
 */
export function mend(parent: Parent, mending: Mending): void {
	for (let index = 0; index < parent.children.length; index += 1) {
		const child = parent.children[index];
		if (child === undefined) continue;
		const replacement = mended(child, parent, mending);
		if (replacement !== null) {
			(parent.children as Nodes[]).splice(index, 1, ...replacement);
			// Replacements are final or get their own visit below; restored label text is visited again.
			index -= 1;
			continue;
		}
		if ('children' in child && !isDone(child)) mend(child, mending);
	}
}

/** null keeps the node; a list takes its place and is visited in turn. */
function mended(node: Nodes, parent: Parent, mending: Mending): Nodes[] | null {
	switch (node.type) {
		case 'html': {
			const text: PhrasingContent = { type: 'text', value: node.value };
			return holdsPhrasing(parent) ? [text] : [{ type: 'paragraph', children: [text] }];
		}
		case 'heading':
			if (node.data === undefined) {
				// The page has the report's title and the sections' own above it.
				node.depth = Math.min(node.depth + 2, 6) as typeof node.depth;
				node.data = {};
			}
			return null;
		case 'listItem':
			if (typeof node.checked === 'boolean') restoreBox(node, node.checked);
			return null;
		case 'image':
		case 'imageReference':
			if (node.type === 'image' && ownFile.test(node.url)) return null;
			return [
				{ type: 'text', value: `[Picture not shown: ${node.alt || 'no description'}. Add it as a file.]` }
			];
		case 'footnoteReference':
			return [footnoteMark(node.identifier, mending)];
		case 'footnoteDefinition': {
			const number = mending.notes.get(node.identifier);
			return [footnote(node.children, number)];
		}
		case 'textDirective':
			if (isDone(node)) return null;
			if (node.name === 'value' || isPlacedKind(node.name)) {
				const name = labelOf(node, mending.source);
				if (hasLabel(node, mending.source)) return [linkPlaceholder(node.name, name)];
			}
			return asTyped(node, mending.source);
		case 'leafDirective': {
			const children: Nodes[] =
				node.name === 'value' && hasLabel(node, mending.source)
					? [linkPlaceholder('value', labelOf(node, mending.source))]
					: asTyped(node, mending.source);
			return [{ type: 'paragraph', children: children as PhrasingContent[] }];
		}
		case 'containerDirective':
			return containerAsTyped(node, mending.source);
		default:
			return null;
	}
}

/** Placeholders carry `data`; a directive as parsed has none. */
function isDone(node: Nodes): boolean {
	return node.type === 'textDirective' && node.data !== undefined;
}

function linkPlaceholder(kind: string, name: string): TextDirective {
	return {
		type: 'textDirective',
		name: kind,
		children: [],
		data: {
			hName: 'span',
			hProperties: {
				className: [kind === 'value' ? 'linked-value' : 'cross-reference'],
				dataKind: kind,
				dataName: name,
				dataRun: objectCharacter
			}
		}
	};
}

function footnoteMark(identifier: string, mending: Mending): TextDirective {
	const number = mending.notes.get(identifier) ?? 0;
	const first = !mending.seen.has(identifier);
	mending.seen.add(identifier);
	return {
		type: 'textDirective',
		name: 'note',
		children: [{ type: 'text', value: String(number) }],
		data: {
			hName: 'sup',
			hProperties: { className: ['note-mark'], dataNote: String(number), dataFirst: first ? 'yes' : 'no' }
		}
	};
}

function footnote(children: BlockContent[] | Parent['children'], number: number | undefined): Nodes {
	const mark: PhrasingContent[] =
		number === undefined
			? []
			: [
					{
						type: 'textDirective',
						name: 'note',
						children: [{ type: 'text', value: String(number) }],
						data: { hName: 'span', hProperties: { className: ['note-number'], dataNote: String(number) } }
					},
					{ type: 'text', value: ' ' }
				];
	const note = {
		type: 'containerNote',
		data: {
			hName: 'div',
			hProperties: { className: ['note'], ...(number === undefined ? {} : { dataNote: String(number) }) }
		},
		children: [...mark, ...children]
	};
	return note as unknown as Nodes;
}

/** "[ ]" stays text: a box that cannot be ticked would be a control without a purpose. */
function restoreBox(item: Extract<Nodes, { type: 'listItem' }>, checked: boolean): void {
	const box: PhrasingContent = { type: 'text', value: checked ? '[x] ' : '[ ] ' };
	item.checked = null;
	const first = item.children[0];
	if (first?.type === 'paragraph') first.children.unshift(box);
	else item.children.unshift({ type: 'paragraph', children: [box] });
}

/** "10:30" or ":x[a *b*]" as it was typed; markup inside the label stays markup. */
function asTyped(node: TextDirective | LeafDirective, source: string): Nodes[] {
	const [start, end] = rangeOf(node);
	const first = node.children[0];
	const last = node.children[node.children.length - 1];
	if (first === undefined || last === undefined) return [{ type: 'text', value: source.slice(start, end) }];
	return [
		{ type: 'text', value: source.slice(start, rangeOf(first)[0]) },
		...node.children,
		{ type: 'text', value: source.slice(rangeOf(last)[1], end) }
	];
}

function containerAsTyped(node: Extract<Nodes, { type: 'containerDirective' }>, source: string): Nodes[] {
	const [start, end] = rangeOf(node);
	const lines = source.slice(start, end).split('\n');
	const closing =
		lines.length > 1 ? /^[\s>]*(:{3,})\s*$/.exec(lines[lines.length - 1] ?? '')?.[1] : undefined;
	const content = node.children.filter(
		(child) => !(child.type === 'paragraph' && child.data && 'directiveLabel' in child.data)
	);
	const text = (value: string): Nodes => ({ type: 'paragraph', children: [{ type: 'text', value }] });
	return [text(lines[0] ?? ''), ...content, ...(closing === undefined ? [] : [text(closing)])];
}

function hasLabel(node: TextDirective | LeafDirective, source: string): boolean {
	const [start] = rangeOf(node);
	return source.startsWith('[', start + (node.type === 'textDirective' ? 1 : 2) + node.name.length);
}

/** The label as typed: names may hold characters that Markdown reads as markup. */
function labelOf(node: TextDirective | LeafDirective, source: string): string {
	const first = node.children[0];
	const last = node.children[node.children.length - 1];
	if (first === undefined || last === undefined) return '';
	return source.slice(rangeOf(first)[0], rangeOf(last)[1]).trim();
}

function rangeOf(node: Nodes): [number, number] {
	return [node.position?.start.offset ?? 0, node.position?.end.offset ?? 0];
}

function holdsPhrasing(parent: Parent): boolean {
	const type: string = parent.type;
	return ![
		'root',
		'blockquote',
		'listItem',
		'footnoteDefinition',
		'containerDirective',
		'containerNote'
	].includes(type);
}
