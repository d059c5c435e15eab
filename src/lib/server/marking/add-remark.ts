import { and, eq } from 'drizzle-orm';
import type { MarkingState, RemarkAnchor, RemarkKind } from '$lib/contracts/marking';
import type { Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, unprocessable } from '../errors';
import { newestRevision, writeRevision } from './remark-steps';
import { stateOf } from './state';
import { lockMarking, requireOpen, requireRevision } from './steps';

const { anchors, remarks, snapshotSections } = schema;

const taken = 'This id names another remark. Send a new one.';

/**
 * Adds a remark under the client's own id. A repeat finds the remark there and changes nothing.
 * Errors: 'conflict' when the id names a remark of another marking; 'stale'; 'unprocessable' for a section that is not there.
 */
export async function addRemark(
	act: Act,
	input: { marking: string; remark: string; kind: RemarkKind; body: string; anchor: RemarkAnchor }
): Promise<MarkingState> {
	return transact(act.repeatable, async (tx) => {
		const marking = await lockMarking(tx, act, 'marking.change', input.marking);
		const [known] = await tx.select().from(remarks).where(eq(remarks.id, input.remark));
		if (known && known.markingId !== marking.id) throw conflict(taken);
		if (known && (await newestRevision(tx, known.id))) return stateOf(tx, marking.id);
		await requireOpen(tx, marking);
		requireRevision(act, marking);
		const { section, selectors, links, projection } = input.anchor;
		const [there] = await tx
			.select({ position: snapshotSections.position })
			.from(snapshotSections)
			.where(
				and(eq(snapshotSections.snapshotId, marking.snapshotId), eq(snapshotSections.position, section))
			);
		if (!there)
			throw unprocessable('The report has no such section.', { 'anchor.section': 'Select the words again.' });
		// Of two markings that take one id at once, the second waits here for the first and then finds it taken.
		const made = await tx
			.insert(remarks)
			.values({ id: input.remark, markingId: marking.id })
			.onConflictDoNothing()
			.returning({ id: remarks.id });
		if (made.length === 0) throw conflict(taken);
		await tx.insert(anchors).values({
			remarkId: input.remark,
			snapshotId: marking.snapshotId,
			sectionPosition: section,
			selector: { selectors, links },
			projection,
			attached: true
		});
		await writeRevision(tx, act, marking, input.remark, {
			n: 1,
			kind: input.kind,
			body: input.body,
			deleted: false
		});
		return stateOf(tx, marking.id);
	});
}
