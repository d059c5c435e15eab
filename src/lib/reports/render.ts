import rehypeStringify from 'rehype-stringify';
import { unified } from 'unified';
import type { Evaluation } from '$lib/worksheets';
import { composeSection, type ComposedProse } from './compose';
import { fill } from './fill';
import { explainUnknown, isKnown, linkableValues, namesOf, placedKinds, placedLabel } from './links';
import { Lru } from './lru';
import type { Numbering, RenderedBlock, RenderedSection, SectionContext } from './types';

const stringifier = unified().use(rehypeStringify, { allowDangerousHtml: true }).freeze();

export interface Renderer {
	renderSection(source: string, context: SectionContext): RenderedSection;
	/** blocks made anew since the start, for tests and measurements */
	readonly made: number;
}

/** A renderer remembers the blocks it made: while someone types, only the changed block is made again. */
export function createRenderer(capacity = 500): Renderer {
	const kept = new Lru<string>(capacity);
	let made = 0;
	return {
		get made() {
			return made;
		},
		renderSection(source, context) {
			const numbering = context.numbering ?? numberPlacements([source]);
			const blocks = composeSection(source).map((block, index): RenderedBlock => {
				const place = {
					number: `${context.sectionNumber}.${index + 1}`,
					id: `b-${context.sectionNumber}-${index + 1}`,
					start: block.start,
					end: block.end
				};
				if (block.kind !== 'prose')
					return { ...place, ...placed(block.kind, block.name, numbering, context.evaluation) };
				const key = `${context.sectionNumber}\u0000${shownBy(block, numbering, context.evaluation)}\u0000${block.key}`;
				const html = kept.take(key, () => {
					made += 1;
					return stringifier.stringify(fill(block.tree, { ...context, numbering }));
				});
				const values = block.links.filter((link) => link.kind === 'value').map((link) => link.name);
				return { ...place, kind: 'prose', html, values };
			});
			return { sectionNumber: context.sectionNumber, blocks };
		}
	};
}

const shared = createRenderer(2_000);

/** Markup of a section, block by block. `html` may go into a page as it stands: no markup of the writer's own is in it. */
export function renderSection(source: string, context: SectionContext): RenderedSection {
	return shared.renderSection(source, context);
}

/** Numbers figures, tables, calculations and comparisons over the sections of a report, in the order of first placement. */
export function numberPlacements(sources: readonly string[]): Numbering {
	const numbering: Numbering = { figure: {}, table: {}, workings: {}, comparison: {} };
	for (const kind of placedKinds) {
		// A name may be any text, "__proto__" too.
		numbering[kind] = Object.create(null) as Record<string, number>;
		let count = 0;
		for (const source of sources) {
			for (const block of composeSection(source)) {
				if (block.kind === kind && numbering[kind][block.name] === undefined) {
					count += 1;
					numbering[kind][block.name] = count;
				}
			}
		}
	}
	return numbering;
}

function placed(
	kind: (typeof placedKinds)[number],
	name: string,
	numbering: Numbering,
	evaluation: Evaluation | null
): Pick<
	Extract<RenderedBlock, { name: string }>,
	'kind' | 'name' | 'known' | 'label' | 'message' | 'nearest'
> {
	const known = isKnown(evaluation, kind, name);
	const unknown = known ? { message: null, nearest: null } : explainUnknown(evaluation, kind, name);
	return { kind, name, known, label: placedLabel(kind, numbering[kind][name]), ...unknown };
}

/** Everything outside the source that a block shows: changes exactly when its markup would. */
function shownBy(block: ComposedProse, numbering: Numbering, evaluation: Evaluation | null): string {
	if (block.links.length === 0) return '';
	const values = evaluation === null ? null : linkableValues(evaluation);
	return JSON.stringify(
		block.links.map(({ kind, name }) => {
			if (kind === 'value') {
				const display = values?.get(name)?.display;
				if (display) return [display.html, display.speech];
			} else if (isKnown(evaluation, kind, name)) return numbering[kind][name] ?? 0;
			return evaluation === null
				? null
				: [...placedKinds, 'value' as const].map((other) => namesOf(evaluation, other));
		})
	);
}
