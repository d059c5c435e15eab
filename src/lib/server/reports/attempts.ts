import { desc, eq } from 'drizzle-orm';
import type { Attempt } from '$lib/contracts/reports';
import { latePenalty, type LateRule } from '$lib/rubrics';
import { schema, type Database, type Transaction } from '../db';
import { hex } from './canonical';
import type { ReportRow } from './report-row';

/** A hand-in as its author sees it. */
export function presentAttempt(
	row: { id: string; attempt: number; manifest: Uint8Array; receivedAt: Date; dueAt: Date; counts: boolean },
	rule: LateRule
): Attempt {
	const { late, minutesLate, deduction, sentence } = latePenalty(
		rule,
		row.dueAt.getTime(),
		row.receivedAt.getTime()
	);
	return {
		id: row.id,
		attempt: row.attempt,
		sha256: hex(row.manifest),
		receivedAt: row.receivedAt.toISOString(),
		dueAt: row.dueAt.toISOString(),
		lateness: { late, minutesLate, deduction, sentence },
		counts: row.counts
	};
}

/** Newest first. */
export async function attemptsOf(
	db: Database | Transaction,
	report: Pick<ReportRow, 'id' | 'countedSnapshotId'>,
	rule: LateRule
): Promise<Attempt[]> {
	const { snapshots } = schema;
	const rows = await db
		.select()
		.from(snapshots)
		.where(eq(snapshots.reportId, report.id))
		.orderBy(desc(snapshots.attempt));
	return rows.map((row) => presentAttempt({ ...row, counts: row.id === report.countedSnapshotId }, rule));
}
