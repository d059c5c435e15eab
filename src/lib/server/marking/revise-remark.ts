import type { MarkingState, RemarkKind } from '$lib/contracts/marking';
import type { Act } from '../auth';
import { transact } from '../db';
import { notFound } from '../errors';
import { newestRevision, sameWords, writeRevision } from './remark-steps';
import { stateOf } from './state';
import { lockMarkingOfRemark, requireOpen, requireRevision } from './steps';

/** Changes a remark's words or kind; on a deleted one it is the way back. What already holds is not written again. */
export async function reviseRemark(
	act: Act,
	input: { remark: string; kind: RemarkKind; body: string }
): Promise<MarkingState> {
	return transact(act.repeatable, async (tx) => {
		const marking = await lockMarkingOfRemark(tx, act, input.remark);
		const newest = await newestRevision(tx, input.remark);
		if (!newest) throw notFound();
		const words = { kind: input.kind, body: input.body, deleted: false };
		if (sameWords(newest, words)) return stateOf(tx, marking.id);
		await requireOpen(tx, marking);
		requireRevision(act, marking);
		await writeRevision(tx, act, marking, input.remark, { n: newest.n + 1, ...words });
		return stateOf(tx, marking.id);
	});
}
