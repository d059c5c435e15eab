import * as audit from '../audit';
import type { Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, tooLate } from '../errors';
import { lockReports, nextRelease, transactionTime } from './release-steps';
import { undoHours, undoUntil } from './undo';

/**
 * Takes returns back while that is possible. The releases and marks that were given stay in the history; the next return
 * writes its own.
 * Errors: 'conflict' for what is not with its author, 'too-late' past the time to undo; then nothing is withdrawn.
 */
export async function withdrawReturn(
	act: Act,
	input: { courseId: string; reports: readonly string[] }
): Promise<{ withdrawn: string[] }> {
	return transact(act.repeatable, async (tx) => {
		const rows = await lockReports(tx, act, input.courseId, input.reports);
		const now = await transactionTime(tx);
		for (const row of rows) {
			if (!row.returnedAt) throw conflict(`${row.author}'s report is not with its author now.`);
			if (undoUntil(row.returnedAt) <= now)
				throw tooLate(
					`Returned more than ${String(undoHours)} hours ago. From here on a mark changes by an appeal.`
				);
		}
		for (const row of rows) {
			const n = await nextRelease(tx, row.report);
			await tx
				.insert(schema.releases)
				.values({ reportId: row.report, n, action: 'withdraw', byId: act.viewer.id });
			await audit.record(tx, {
				actorId: act.viewer.id,
				courseId: input.courseId,
				action: 'report.withdraw',
				subjectKind: 'report',
				subjectId: row.report,
				detail: { n }
			});
		}
		return { withdrawn: rows.map((row) => row.report) };
	});
}
