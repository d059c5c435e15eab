import { sql, type SQL } from 'drizzle-orm';
import type { Database, Transaction } from '../db';

/** A report with what every verb about it needs to know. */
export interface ReportRow {
	id: string;
	alias: string;
	workId: string;
	authorId: string;
	countedSnapshotId: string | null;
	assignmentId: string;
	courseId: string;
	hideNames: boolean;
}

const columns = sql`r.id, r.alias, r.work_id, r.author_id, r.counted_snapshot_id, a.id as assignment_id, a.course_id, a.hide_names
	from reports r join work w on w.id = r.work_id join assignments a on a.id = w.assignment_id`;

/** Null when there is none. Says nothing of who may see it. */
export const reportById = (db: Database | Transaction, id: string) => one(db, sql`r.id = ${id}`);

export const reportOf = (db: Database | Transaction, workId: string, authorId: string) =>
	one(db, sql`r.work_id = ${workId} and r.author_id = ${authorId}`);

/** Holds the report until the transaction ends: of two hand-ins at once the second waits and sees the first. */
export const lockReport = (tx: Transaction, id: string) => one(tx, sql`r.id = ${id} for update of r`);

async function one(db: Database | Transaction, condition: SQL): Promise<ReportRow | null> {
	const [row] = await db.execute<{
		id: string;
		alias: string;
		work_id: string;
		author_id: string;
		counted_snapshot_id: string | null;
		assignment_id: string;
		course_id: string;
		hide_names: boolean;
	}>(sql`select ${columns} where ${condition}`);
	if (!row) return null;
	return {
		id: row.id,
		alias: row.alias,
		workId: row.work_id,
		authorId: row.author_id,
		countedSnapshotId: row.counted_snapshot_id,
		assignmentId: row.assignment_id,
		courseId: row.course_id,
		hideNames: row.hide_names
	};
}
