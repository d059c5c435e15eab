import { and, eq, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, notFound } from '../errors';

const { assignments, teamMembers, work } = schema;

/** Opens the work of the person's present team on an assignment; repeated, the same work. */
export async function startWork(act: Act, input: { assignment: string }): Promise<{ workId: string }> {
	return transact(act.repeatable, async (tx) => {
		const [assignment] = await tx
			.select()
			.from(assignments)
			.where(eq(assignments.id, input.assignment))
			.for('share');
		if (!assignment) throw notFound();
		await authorise(tx, act.viewer, 'assignment.see', assignment.id);
		const [membership] = await tx
			.select({ teamId: teamMembers.teamId })
			.from(teamMembers)
			.where(
				and(
					eq(teamMembers.courseId, assignment.courseId),
					eq(teamMembers.userId, act.viewer.id),
					sql`${teamMembers.during} @> now()`
				)
			);
		if (!membership) throw conflict('You are on no team yet. Ask your instructor to place you.');
		const id = uuidv7();
		const [made] = await tx
			.insert(work)
			.values({ id, assignmentId: assignment.id, teamId: membership.teamId })
			.onConflictDoNothing()
			.returning({ id: work.id });
		if (made) {
			await audit.record(tx, {
				actorId: act.viewer.id,
				courseId: assignment.courseId,
				action: 'work.start',
				subjectKind: 'work',
				subjectId: id
			});
			return { workId: id };
		}
		const [existing] = await tx
			.select({ id: work.id })
			.from(work)
			.where(and(eq(work.assignmentId, assignment.id), eq(work.teamId, membership.teamId)));
		if (!existing) throw notFound();
		return { workId: existing.id };
	});
}
