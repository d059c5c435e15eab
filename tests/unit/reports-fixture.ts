import { defaultTreeAdapter, parseFragment, serialize, type DefaultTreeAdapterTypes } from 'parse5';
import type { RunTree } from '$lib/reports';
import type { Evaluation, ShownComparison, ShownFit, ShownQuantity } from '$lib/worksheets';

/** Invented results of an invented run: enough of an evaluation for a report to link to. */
export function quantity(
	name: string,
	value: number,
	u: number | null,
	unit: string,
	text: string,
	label = name
): ShownQuantity {
	return {
		name,
		label,
		symbol: name,
		value,
		unit,
		standardUncertainty: u,
		degreesOfFreedom: 8,
		coverageFactor: 2.3,
		expanded95: u === null ? null : 2.3 * u,
		display: { text, tex: text, html: text.replace('-1', '<sup>−1</sup>'), speech: `${text}, spoken` },
		budget: []
	};
}

export function evaluation(): Evaluation {
	const slope = quantity('slope', -5003.2, 72, 'K', '−5003(72) K', 'Slope');
	const intercept = quantity('intercept', 20.1, 0.2, '1', '20.1(2)', 'Intercept');
	const values = [
		quantity('H_vap', 41.62, 0.6, 'kJ/mol', '41.6(6) kJ mol-1', 'Enthalpy of vaporization'),
		quantity('T_b', 373.48, 0.3, 'K', '373.5(3) K', 'Boiling temperature'),
		quantity('p_b', 756.2, null, 'torr', '756.2 torr', 'Barometric pressure')
	];
	return {
		engine: 'test',
		problems: [],
		quantities: Object.fromEntries(values.map((value) => [value.name, value])),
		tables: { readings: { name: 'readings', caption: 'Readings', columns: [], rows: [] } },
		fits: { line: { name: 'line', model: 'line', parameters: [slope, intercept] } as ShownFit },
		comparisons: {
			H_vap: {
				name: 'H_vap',
				quantity: 'H_vap',
				reference: {
					value: 40.65,
					unit: 'kJ/mol',
					standardUncertainty: null,
					conditions: '',
					source: '',
					display: values[0]?.display
				},
				sentence: 'Compatible.'
			} as ShownComparison
		},
		figures: {
			line: {
				name: 'line',
				caption: 'ln p against 1/T',
				x: { label: '', symbol: '', unit: '' },
				y: { label: '', symbol: '', unit: '' },
				series: [],
				line: null
			}
		},
		workings: {
			H_vap: {
				name: 'H_vap',
				title: 'Enthalpy',
				row: null,
				symbolic: '',
				substituted: '',
				result: '',
				partials: [],
				budget: []
			}
		}
	};
}

export type Node = DefaultTreeAdapterTypes.ChildNode;

export function nodesOf(html: string): Node[] {
	return parseFragment(html).childNodes;
}

/** Markup as a browser would write it out: one spelling of entities and attributes. */
export function normalised(html: string): string {
	return serialize(parseFragment(html));
}

export function elementsOf(html: string): DefaultTreeAdapterTypes.Element[] {
	const found: DefaultTreeAdapterTypes.Element[] = [];
	const visit = (node: Node): void => {
		if (!defaultTreeAdapter.isElementNode(node)) return;
		found.push(node);
		node.childNodes.forEach(visit);
	};
	nodesOf(html).forEach(visit);
	return found;
}

/** The rule by which a page's nodes become runs, applied to a parsed page. */
export function runTreeOf(nodes: Node[]): RunTree {
	return {
		children: nodes.map((node): RunTree => {
			if (defaultTreeAdapter.isTextNode(node)) return { text: node.value };
			if (!defaultTreeAdapter.isElementNode(node)) return { text: '' };
			const run = node.attrs.find(({ name }) => name === 'data-run');
			return run ? { atom: run.value } : runTreeOf(node.childNodes);
		})
	};
}

/** "the [marked] words" -> the text without markers and their range in code points. */
export function marked(text: string): { text: string; start: number; end: number } {
	const from = text.indexOf('«');
	const to = text.indexOf('»');
	const plain = text.replace(/[«»]/g, '');
	return { text: plain, start: [...text.slice(0, from)].length, end: [...text.slice(0, to)].length - 1 };
}

/** Names of elements and attributes that a rendered block may hold; KaTeX's own included. */
const ours = [
	'p',
	'h3',
	'h4',
	'h5',
	'h6',
	'blockquote',
	'ul',
	'ol',
	'li',
	'pre',
	'hr',
	'div',
	'table',
	'thead',
	'tbody',
	'tr',
	'th',
	'td',
	'a',
	'strong',
	'em',
	'del',
	'code',
	'br',
	'img',
	'span',
	'sup'
];
const katex = [
	'svg',
	'path',
	'line',
	'math',
	'semantics',
	'annotation',
	'mrow',
	'mi',
	'mn',
	'mo',
	'ms',
	'mtext',
	'mspace',
	'mfrac',
	'msqrt',
	'mroot',
	'msub',
	'msup',
	'msubsup',
	'munder',
	'mover',
	'munderover',
	'mtable',
	'mtr',
	'mtd',
	'mstyle',
	'mpadded',
	'mphantom',
	'menclose',
	'mglyph',
	'merror',
	'sub',
	'i'
];
const attributes = new Set([
	'class',
	'id',
	'href',
	'title',
	'rel',
	'src',
	'alt',
	'start',
	'align',
	'data-run',
	'data-name',
	'aria-hidden'
]);
const mathAttributes = new Set([
	...attributes,
	'style',
	'xmlns',
	'encoding',
	'display',
	'mathvariant',
	'stretchy',
	'fence',
	'separator',
	'accent',
	'accentunder',
	'width',
	'height',
	'depth',
	'lspace',
	'rspace',
	'viewBox',
	'preserveAspectRatio',
	'd',
	'x1',
	'x2',
	'y1',
	'y2',
	'stroke-width',
	'scriptlevel',
	'displaystyle',
	'columnalign',
	'rowspacing',
	'columnspacing',
	'rowlines',
	'columnlines',
	'linethickness',
	'minsize',
	'maxsize',
	'mathcolor',
	'mathbackground',
	'notation',
	'voffset',
	'symmetric',
	'movablelimits',
	'largeop',
	'side',
	'columnwidth'
]);

/** What a rendered block holds that it must not, in words; empty when there is nothing. */
export function foreignMarkup(html: string): string[] {
	const found: string[] = [];
	const visit = (node: Node, inFormula: boolean): void => {
		if (defaultTreeAdapter.isCommentNode(node)) found.push('comment');
		if (!defaultTreeAdapter.isElementNode(node)) return;
		const isFormula =
			inFormula ||
			node.attrs.some(({ name, value }) => name === 'class' && value.split(' ').includes('formula'));
		if (![...ours, ...(isFormula ? katex : [])].includes(node.tagName)) found.push(`<${node.tagName}>`);
		for (const { name, value } of node.attrs) {
			if (!(isFormula ? mathAttributes : attributes).has(name)) found.push(`${node.tagName} ${name}`);
			const isAddress = name === 'href' || name === 'src';
			// Characters below space are dropped by browsers inside a scheme: "java\tscript:".
			const scheme = /^([a-z][a-z0-9+.-]*):/i
				.exec([...value].filter((c) => c > ' ').join(''))?.[1]
				?.toLowerCase();
			if (isAddress && scheme !== undefined && !['http', 'https', 'mailto'].includes(scheme))
				found.push(`${name}=${value}`);
			if (name === 'src' && !/^\/api\/v1\/files\/[0-9a-f-]{36}$/.test(value)) found.push(`src=${value}`);
			if (name === 'style' && /url|expression|@import|position:fixed/i.test(value))
				found.push(`style=${value}`);
		}
		node.childNodes.forEach((child) => visit(child, isFormula));
	};
	nodesOf(html).forEach((node) => visit(node, false));
	return found;
}
