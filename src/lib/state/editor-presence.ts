import type { Awareness } from 'y-protocols/awareness';
import * as Y from 'yjs';
import { sectionText } from '$lib/collab';

/** Initials of the others who have their cursor in a block, by block number. */
export type Present = Record<string, string[]>;

interface Placed {
	number: string;
	/** range in the source, UTF-16 units */
	start: number;
	end: number;
}

/** Who else writes where. Presence is best effort: what cannot be placed is left out. */
export function presenceIn(
	doc: Y.Doc,
	awareness: Awareness,
	blocks: readonly Placed[],
	self: string
): Present {
	const present: Present = {};
	for (const [client, state] of awareness.getStates()) {
		if (client === doc.clientID) continue;
		const user = state['user'] as { id?: unknown; name?: unknown } | undefined;
		const initials = typeof user?.name === 'string' ? user.name.slice(0, 4) : '';
		if (initials === '' || user?.id === self) continue;
		const block = blockOf(placeIn(doc, state['cursor']), blocks);
		if (block && !present[block]?.includes(initials)) (present[block] ??= []).push(initials);
	}
	return present;
}

/** UTF-16 offset of a cursor in the section's text; null when it has none there. */
function placeIn(doc: Y.Doc, cursor: unknown): number | null {
	const head = (cursor as { head?: unknown } | null | undefined)?.head;
	if (head === undefined || head === null) return null;
	try {
		const relative = Y.createRelativePositionFromJSON(head);
		const absolute = Y.createAbsolutePositionFromRelativePosition(relative, doc);
		return absolute?.type === sectionText(doc) ? absolute.index : null;
	} catch {
		return null;
	}
}

/** The block at an offset, or the one before it. */
export function blockOf(offset: number | null, blocks: readonly Placed[]): string | null {
	if (offset === null) return null;
	return blocks.findLast(({ start }) => start <= offset)?.number ?? blocks[0]?.number ?? null;
}
