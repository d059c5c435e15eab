import { and, eq, sql } from 'drizzle-orm';
import { authorise, type Act, type Action } from '../auth';
import { schema, type Database, type Transaction } from '../db';
import { conflict, notFound, stale, unprocessable } from '../errors';

const { markings } = schema;

export type MarkingRow = typeof markings.$inferSelect;

/** Locks a marking against every other writer, then asks whether the person may do this to it. */
export async function lockMarking(
	tx: Transaction,
	act: Act,
	action: Action,
	markingId: string
): Promise<MarkingRow> {
	const [row] = await tx.select().from(markings).where(eq(markings.id, markingId)).for('update');
	if (!row) throw notFound();
	await authorise(tx, act.viewer, action, markingId);
	return row;
}

/** As lockMarking, from one of its remarks. */
export async function lockMarkingOfRemark(tx: Transaction, act: Act, remarkId: string): Promise<MarkingRow> {
	const [found] = await tx
		.select({ markingId: schema.remarks.markingId })
		.from(schema.remarks)
		.where(eq(schema.remarks.id, remarkId));
	if (!found) throw notFound();
	return lockMarking(tx, act, 'marking.change', found.markingId);
}

/** Whether the report of a marking is with its author now. */
export async function isReturned(db: Database | Transaction, markingId: string): Promise<boolean> {
	const [row] = await db.execute<{ action: string | null }>(
		sql`select (select rel.action from releases rel where rel.report_id = s.report_id order by rel.n desc limit 1) as action
			from markings m join snapshots s on s.id = m.snapshot_id where m.id = ${markingId}`
	);
	return row?.action === 'return';
}

/** Refuses changes to what is finished or has been returned. */
export async function requireOpen(tx: Transaction, marking: MarkingRow): Promise<void> {
	if (await isReturned(tx, marking.id))
		throw conflict('Returned to its author. Only the instructor can take that back.');
	if (marking.finishedAt) throw conflict('Finished. Reopen it to change a level or a remark.');
}

/** Refuses a write that was made without seeing the newest state. */
export function requireRevision(act: Act, marking: MarkingRow): void {
	if (act.revision === undefined)
		throw unprocessable('Send If-Match with the revision you saw, so that nothing is overwritten unseen.');
	if (act.revision !== marking.revision)
		throw stale('This marking was changed in another window. Look at its newest state, then repeat.');
}

export async function raiseRevision(
	tx: Transaction,
	markingId: string,
	change: { finishedAt?: Date | null } = {}
): Promise<void> {
	await tx
		.update(markings)
		.set({ ...change, revision: sql`${markings.revision} + 1` })
		.where(and(eq(markings.id, markingId)));
}

/** The course a marking belongs to, for the audit. */
export async function courseOfMarking(tx: Transaction, markingId: string): Promise<string | null> {
	const [row] = await tx.execute<{ course_id: string }>(
		sql`select t.course_id from markings m join snapshots s on s.id = m.snapshot_id join reports r on r.id = s.report_id
			join work w on w.id = r.work_id join teams t on t.id = w.team_id where m.id = ${markingId}`
	);
	return row?.course_id ?? null;
}
