import { and, eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { MarkingState } from '$lib/contracts/marking';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { schema, transact, type Transaction } from '../db';
import { conflict, notFound } from '../errors';
import { firstName } from './label';
import { nextReport, sittingFor } from './read-sitting';
import { stateOf } from './state';

const { assignments, markings, reports, users, work } = schema;

/** Locks the report, so that two graders cannot begin at once. */
async function lockReport(tx: Transaction, alias: string) {
	const [report] = await tx.select().from(reports).where(eq(reports.alias, alias)).for('update');
	if (!report) throw notFound();
	return report;
}

async function takenBy(tx: Transaction, act: Act, grader: string, assignmentId: string, alias: string) {
	const sitting = await sittingFor(act.viewer, assignmentId, tx);
	const next = sitting ? nextReport(sitting.reports, alias) : null;
	return conflict(
		`${firstName(grader)} is marking this one. ${next ? `Next: ${next.label}.` : 'Nothing else waits for you here.'}`,
		{ next }
	);
}

/**
 * Begins the first marking of a report's counted snapshot, or resumes one's own. The rubric is the assignment's at this
 * moment and stays the marking's.
 * Errors: 'conflict' with `next` while another grader has the first marking; 'not-found' outside one's lab sections.
 */
export async function openMarking(act: Act, input: { alias: string }): Promise<MarkingState> {
	return transact(act.repeatable, async (tx) => {
		const report = await lockReport(tx, input.alias);
		await authorise(tx, act.viewer, 'report.mark', report.id);
		if (!report.countedSnapshotId) throw notFound();
		const [assignment] = await tx
			.select({
				id: assignments.id,
				courseId: assignments.courseId,
				rubricVersionId: assignments.rubricVersionId
			})
			.from(work)
			.innerJoin(assignments, eq(assignments.id, work.assignmentId))
			.where(eq(work.id, report.workId));
		if (!assignment) throw notFound();
		const [first] = await tx
			.select({ id: markings.id, graderId: markings.graderId, grader: users.name })
			.from(markings)
			.innerJoin(users, eq(users.id, markings.graderId))
			.where(and(eq(markings.snapshotId, report.countedSnapshotId), eq(markings.kind, 'first')));
		if (first && first.graderId !== act.viewer.id)
			throw await takenBy(tx, act, first.grader, assignment.id, input.alias);
		if (first) return stateOf(tx, first.id);
		const id = uuidv7();
		await tx.insert(markings).values({
			id,
			snapshotId: report.countedSnapshotId,
			rubricVersionId: assignment.rubricVersionId,
			graderId: act.viewer.id,
			kind: 'first'
		});
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: assignment.courseId,
			action: 'report.mark',
			subjectKind: 'marking',
			subjectId: id
		});
		return stateOf(tx, id);
	});
}
