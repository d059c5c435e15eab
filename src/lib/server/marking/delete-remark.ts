import type { MarkingState } from '$lib/contracts/marking';
import type { Act } from '../auth';
import { transact } from '../db';
import { notFound } from '../errors';
import { newestRevision, writeRevision } from './remark-steps';
import { stateOf } from './state';
import { lockMarkingOfRemark, requireOpen, requireRevision } from './steps';

/** Takes a remark away by a further revision; its words stay in the history and reviseRemark brings them back. */
export async function deleteRemark(act: Act, input: { remark: string }): Promise<MarkingState> {
	return transact(act.repeatable, async (tx) => {
		const marking = await lockMarkingOfRemark(tx, act, input.remark);
		const newest = await newestRevision(tx, input.remark);
		if (!newest) throw notFound();
		if (newest.deleted) return stateOf(tx, marking.id);
		await requireOpen(tx, marking);
		requireRevision(act, marking);
		const { kind, body } = newest;
		await writeRevision(tx, act, marking, input.remark, { n: newest.n + 1, kind, body, deleted: true });
		return stateOf(tx, marking.id);
	});
}
