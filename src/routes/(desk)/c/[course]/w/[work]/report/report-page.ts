import type { ScaleSection } from '$lib/components/shared/scale';
import { sectionText, type SharedDocument } from '$lib/collab';
import type { RenderedBlock } from '$lib/reports';
import { sectionId } from '$lib/components/report';
import type { DrawnSection } from '$lib/state/report.svelte';

/** The glass at the left: a section for each graduation, its checks as minor ticks. */
export function scaleOf(sections: readonly DrawnSection[]): ScaleSection[] {
	return sections.map(({ position, title, words, checks }) => {
		const met = checks.filter((check) => check.met).length;
		return {
			id: sectionId(position),
			number: String(position),
			title,
			length: Math.max(1, words),
			...(checks.length > 0 && { summary: `${met} of ${checks.length} checks met` }),
			ticks: checks.map((check, index) => ({
				href: `#check-${position}-${index}`,
				label: check.message,
				state: check.met ? ('settled' as const) : ('open' as const)
			}))
		};
	});
}

/** Puts a known name into a placed link that named nothing. */
export function mendLink(doc: SharedDocument, block: RenderedBlock, name: string): void {
	if (block.kind === 'prose') return;
	const text = sectionText(doc);
	const source = text.toString().slice(block.start, block.end);
	const opening = source.indexOf('[');
	const closing = source.indexOf(']', opening);
	if (opening === -1 || closing === -1) return;
	doc.transact(() => {
		text.delete(block.start + opening + 1, closing - opening - 1);
		text.insert(block.start + opening + 1, name);
	});
}
