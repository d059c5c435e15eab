import { eq } from 'drizzle-orm';
import type { ReplyShape } from '$lib/contracts/marking';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, notFound } from '../errors';
import { courseOfMarking } from './steps';

const { remarks, replies } = schema;

const taken = 'This id names another reply. Send a new one.';

/** The author's answer to a remark on a returned report, under the client's own id; a repeat changes nothing. */
export async function replyToRemark(
	act: Act,
	input: { remark: string; reply: string; body: string }
): Promise<ReplyShape> {
	return transact(act.repeatable, async (tx) => {
		const [remark] = await tx.select().from(remarks).where(eq(remarks.id, input.remark)).for('update');
		if (!remark) throw notFound();
		await authorise(tx, act.viewer, 'remark.reply', remark.id);
		const [known] = await tx.select().from(replies).where(eq(replies.id, input.reply));
		if (known && (known.remarkId !== remark.id || known.byId !== act.viewer.id)) throw conflict(taken);
		if (known) return { id: known.id, body: known.body, at: known.at.toISOString(), own: true };
		// Of two answers that take one id at once, the second waits here for the first and then finds it taken.
		const [row] = await tx
			.insert(replies)
			.values({ id: input.reply, remarkId: remark.id, byId: act.viewer.id, body: input.body })
			.onConflictDoNothing()
			.returning();
		if (!row) throw conflict(taken);
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: await courseOfMarking(tx, remark.markingId),
			action: 'remark.reply',
			subjectKind: 'remark',
			subjectId: remark.id,
			detail: { reply: row.id }
		});
		return { id: row.id, body: row.body, at: row.at.toISOString(), own: true };
	});
}
