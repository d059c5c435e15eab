import { randomInt } from 'node:crypto';
import { and, eq, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { SittingShape } from '$lib/contracts/marking';
import * as audit from '../audit';
import { allowed, authorise, type Act } from '../auth';
import { schema, transact, type Transaction } from '../db';
import { sittingState } from './read-sitting';

const { assignments, sittingReports, sittings } = schema;

/** Fisher and Yates; the order is drawn by the system's own source of randomness. */
function shuffled<T>(items: readonly T[]): T[] {
	const result = [...items];
	for (let last = result.length - 1; last > 0; last -= 1) {
		const chosen = randomInt(last + 1);
		const held = result[last] as T;
		result[last] = result[chosen] as T;
		result[chosen] = held;
	}
	return result;
}

/** Reports handed in that this grader may mark and the sitting does not hold yet. */
async function newReports(tx: Transaction, grader: string, assignmentId: string, sittingId: string) {
	const rows = await tx.execute<{ id: string }>(
		sql`select rep.id from reports rep join work wk on wk.id = rep.work_id
			where wk.assignment_id = ${assignmentId} and rep.counted_snapshot_id is not null
			and ${allowed('report.mark', grader, sql`rep.id`)}
			and not exists (select 1 from sitting_reports sr where sr.sitting_id = ${sittingId} and sr.report_id = rep.id)`
	);
	return rows.map((row) => row.id);
}

/**
 * Opens the grader's sitting for an assignment. There is one; its order is drawn when it is first opened and kept, so
 * that drift over an evening follows neither the alphabet nor the clock. Reports that came in since follow at its end,
 * shuffled among themselves.
 */
export async function openSitting(act: Act, input: { assignment: string }): Promise<SittingShape> {
	const sittingId = await transact(act.repeatable, async (tx) => {
		// Two windows of one grader must not draw two orders; other graders need not wait.
		await tx.execute(
			sql`select pg_advisory_xact_lock(hashtextextended(${`sitting ${act.viewer.id} ${input.assignment}`}, 0))`
		);
		await authorise(tx, act.viewer, 'assignment.mark', input.assignment);
		const mine = and(eq(sittings.assignmentId, input.assignment), eq(sittings.graderId, act.viewer.id));
		const [known] = await tx.select({ id: sittings.id }).from(sittings).where(mine);
		const id = known?.id ?? uuidv7();
		if (!known)
			await tx.insert(sittings).values({ id, assignmentId: input.assignment, graderId: act.viewer.id });
		const added = shuffled(await newReports(tx, act.viewer.id, input.assignment, id));
		if (known && added.length === 0) return id;
		const [last] = await tx.execute<{ position: number | null }>(
			sql`select max(position) as position from sitting_reports where sitting_id = ${id}`
		);
		const from = (last?.position ?? 0) + 1;
		if (added.length > 0)
			await tx
				.insert(sittingReports)
				.values(added.map((reportId, index) => ({ sittingId: id, position: from + index, reportId })));
		const [assignment] = await tx
			.select({ courseId: assignments.courseId })
			.from(assignments)
			.where(eq(assignments.id, input.assignment));
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: assignment?.courseId ?? null,
			action: 'assignment.mark',
			subjectKind: 'sitting',
			subjectId: id,
			detail: { added: added.length }
		});
		return id;
	});
	return sittingState(act.viewer, sittingId);
}
