import { and, desc, eq, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { KeptRemarkShape, RemarkKind } from '$lib/contracts/marking';
import * as audit from '../audit';
import { authorise, type Act, type Viewer } from '../auth';
import { database, schema, transact, type Transaction } from '../db';
import { notFound } from '../errors';

const { keptRemarks } = schema;

const present = (row: typeof keptRemarks.$inferSelect): KeptRemarkShape => ({
	id: row.id,
	kind: row.kind as RemarkKind,
	body: row.body,
	uses: row.uses
});

/** The grader's own kept remarks in a course, most used first. */
export async function listKeptRemarks(viewer: Viewer, courseId: string): Promise<KeptRemarkShape[]> {
	const db = database();
	await authorise(db, viewer, 'course.mark', courseId);
	const rows = await db
		.select()
		.from(keptRemarks)
		.where(and(eq(keptRemarks.courseId, courseId), eq(keptRemarks.ownerId, viewer.id)))
		.orderBy(desc(keptRemarks.uses), desc(keptRemarks.id))
		.limit(200);
	return rows.map(present);
}

/** Keeps a remark. The same words are kept once; keeping them again changes their kind. */
export async function keepRemark(
	act: Act,
	input: { courseId: string; kind: RemarkKind; body: string }
): Promise<KeptRemarkShape> {
	return transact(act.repeatable, async (tx) => {
		const { courseId } = input;
		await authorise(tx, act.viewer, 'course.mark', courseId);
		const [row] = await tx
			.insert(keptRemarks)
			.values({ id: uuidv7(), courseId, ownerId: act.viewer.id, kind: input.kind, body: input.body })
			.onConflictDoUpdate({
				target: [keptRemarks.courseId, keptRemarks.ownerId, keptRemarks.body],
				set: { kind: input.kind }
			})
			.returning();
		if (!row) throw notFound();
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId,
			action: 'remark.keep',
			subjectKind: 'keptRemark',
			subjectId: row.id
		});
		return present(row);
	});
}

async function lockOwn(tx: Transaction, act: Act, keptId: string) {
	const [row] = await tx
		.select()
		.from(keptRemarks)
		.where(and(eq(keptRemarks.id, keptId), eq(keptRemarks.ownerId, act.viewer.id)))
		.for('update');
	if (!row) throw notFound();
	await authorise(tx, act.viewer, 'course.mark', row.courseId);
	return row;
}

export async function useKeptRemark(act: Act, input: { kept: string }): Promise<KeptRemarkShape> {
	return transact(act.repeatable, async (tx) => {
		const kept = await lockOwn(tx, act, input.kept);
		await tx
			.update(keptRemarks)
			.set({ uses: sql`${keptRemarks.uses} + 1` })
			.where(eq(keptRemarks.id, kept.id));
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: kept.courseId,
			action: 'remark.use',
			subjectKind: 'keptRemark',
			subjectId: kept.id
		});
		return present({ ...kept, uses: kept.uses + 1 });
	});
}

/** No longer keeps a remark; where it was used it stays. */
export async function dropKeptRemark(act: Act, input: { kept: string }): Promise<void> {
	await transact(act.repeatable, async (tx) => {
		const kept = await lockOwn(tx, act, input.kept);
		await tx.delete(keptRemarks).where(eq(keptRemarks.id, kept.id));
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: kept.courseId,
			action: 'remark.drop',
			subjectKind: 'keptRemark',
			subjectId: kept.id
		});
		return null;
	});
}
