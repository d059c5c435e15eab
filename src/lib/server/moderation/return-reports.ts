import * as audit from '../audit';
import type { Act } from '../auth';
import { schema, transact, type Transaction } from '../db';
import { conflict } from '../errors';
import * as mail from '../mail';
import type { Marked } from './marked';
import { courseHead, lockReports, nextFinalMark, nextRelease, transactionTime } from './release-steps';
import { undoUntil } from './undo';

export interface Returning {
	returned: string[];
	already: string[];
	students: number;
	undoUntil: string;
}

async function returnOne(
	tx: Transaction,
	act: Act,
	row: Marked & { marking: string },
	course: { id: string; code: string; slug: string }
): Promise<void> {
	const n = await nextRelease(tx, row.report);
	await tx.insert(schema.finalMarks).values({
		reportId: row.report,
		n: await nextFinalMark(tx, row.report),
		source: 'marking',
		markingId: row.marking,
		pointsHundredths: row.late.points,
		deductionHundredths: row.late.deduction,
		reason: row.late.sentence,
		byId: act.viewer.id
	});
	await tx.insert(schema.releases).values({ reportId: row.report, n, action: 'return', byId: act.viewer.id });
	await mail.enqueue(tx, {
		kind: 'returned',
		// One letter for each return: after one was taken back, the next is news again.
		subject: `${row.report}:${String(n)}`,
		recipient: row.email,
		payload: {
			name: row.author,
			course: course.code,
			title: row.assignmentTitle,
			slug: course.slug,
			work: row.work
		}
	});
	await audit.record(tx, {
		actorId: act.viewer.id,
		courseId: course.id,
		action: 'report.return',
		subjectKind: 'report',
		subjectId: row.report,
		detail: { n, points: row.late.points, deduction: row.late.deduction }
	});
}

const isReady = (row: Marked): row is Marked & { marking: string } => row.marking !== null && row.finished;

/**
 * Returns marked reports to their authors: mark after the course's late rule, release, and a letter to each, in one
 * transaction. What is back already is left alone and named.
 * Errors: 'conflict' when a marking is not finished: then nothing is returned.
 */
export async function returnReports(
	act: Act,
	input: { courseId: string; reports: readonly string[] }
): Promise<Returning> {
	return transact(act.repeatable, async (tx) => {
		const rows = await lockReports(tx, act, input.courseId, input.reports);
		const already = rows.filter((row) => row.returnedAt);
		const fresh = rows.filter((row) => !row.returnedAt);
		const ready = fresh.filter(isReady);
		const unready = fresh.filter((row) => !isReady(row));
		if (unready.length > 0) {
			const names = unready.map((row) => row.author).join(', ');
			throw conflict(`Marking not finished for ${names}. Nothing was returned; leave them out, or wait.`);
		}
		const head = await courseHead(tx, input.courseId);
		for (const row of ready) await returnOne(tx, act, row, { id: input.courseId, ...head });
		return {
			returned: ready.map((row) => row.report),
			already: already.map((row) => row.report),
			students: new Set(ready.map((row) => row.authorId)).size,
			undoUntil: undoUntil(await transactionTime(tx)).toISOString()
		};
	});
}
