import type { Element, ElementContent, Root as HastRoot, RootContent } from 'hast';
import type { Evaluation } from '$lib/worksheets';
import { escapeHtml, formulaHtml } from './formulas';
import { explainUnknown, isKnown, isPlacedKind, linkableValues, placedLabel } from './links';
import { shownHtml } from './shown-html';
import type { Numbering } from './types';

/** Markup made here and nowhere else; the tree it goes into was sanitized before and is only stringified after. */
interface Raw {
	type: 'raw';
	value: string;
}

export interface Filling {
	evaluation: Evaluation | null;
	sectionNumber: number;
	numbering: Numbering;
}

/** A copy of a composed tree with values, formulas, numbers of figures and addresses of notes put in. */
export function fill(tree: HastRoot, filling: Filling): HastRoot {
	return { type: 'root', children: tree.children.map((child) => filled(child, filling) as RootContent) };
}

function filled(node: RootContent | ElementContent, filling: Filling): ElementContent {
	if (node.type !== 'element') return node as ElementContent;
	const { dataRun, dataKind, dataName, dataNote } = node.properties;
	if (typeof dataName === 'string' && typeof dataKind === 'string')
		return link(dataKind, dataName, node, filling);
	if (typeof dataRun === 'string') {
		const display = node.tagName === 'div';
		return { ...node, children: [raw(formulaHtml(dataRun, display))] };
	}
	const element = { ...node, children: node.children.map((child) => filled(child, filling)) };
	return typeof dataNote === 'string' ? note(element, dataNote, filling.sectionNumber) : element;
}

function link(kind: string, name: string, node: Element, filling: Filling): Element {
	const { evaluation } = filling;
	const properties = { dataName: name, dataRun: node.properties.dataRun };
	if (isPlacedKind(kind)) {
		if (isKnown(evaluation, kind, name)) {
			const label = placedLabel(kind, filling.numbering[kind][name]);
			const children: ElementContent[] = [{ type: 'text', value: label }];
			const className = ['cross-reference'];
			return {
				type: 'element',
				tagName: 'a',
				properties: { className, href: `#${kind}-${name}`, ...properties },
				children
			};
		}
	} else {
		const quantity = evaluation === null ? undefined : linkableValues(evaluation).get(name);
		if (quantity) {
			const shown = shownHtml(quantity.display);
			const spoken = escapeHtml(quantity.display.speech);
			const value = `<span aria-hidden="true">${shown}</span><span class="sr-only select-none">${spoken}</span>`;
			return {
				type: 'element',
				tagName: 'span',
				properties: { className: ['linked-value'], ...properties },
				children: [raw(value)]
			};
		}
	}
	const { message } = explainUnknown(evaluation, isPlacedKind(kind) ? kind : 'value', name);
	const text = `<code>${escapeHtml(name === '' ? '?' : name)}</code> <span class="unknown-link-note">${escapeHtml(message)}</span>`;
	return {
		type: 'element',
		tagName: 'span',
		properties: { className: ['unknown-link'], ...properties },
		children: [raw(text)]
	};
}

/** Marks and notes point at each other; addresses carry the section's number, since every section counts from 1. */
function note(element: Element, number: string, sectionNumber: number): Element {
	const place = `${sectionNumber}-${number}`;
	const address = (href: string): ElementContent[] => [
		{ type: 'element', tagName: 'a', properties: { href }, children: element.children }
	];
	if (element.tagName === 'div')
		return { ...element, properties: { className: ['note'], id: `note-${place}` } };
	const isMark = element.tagName === 'sup';
	return {
		...element,
		properties: {
			className: element.properties.className,
			...(isMark && element.properties.dataFirst === 'yes' ? { id: `note-mark-${place}` } : {})
		},
		children: address(isMark ? `#note-${place}` : `#note-mark-${place}`)
	};
}

function raw(value: string): ElementContent {
	const node: Raw = { type: 'raw', value };
	return node as unknown as ElementContent;
}
