import { and, eq, isNull } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { schema, transact, type Transaction } from '../db';
import { notFound, unprocessable } from '../errors';

const { assignments, extensions, members, teams } = schema;

export interface Dates {
	/** 'YYYY-MM-DDTHH:MM' in the course's zone */
	dueLocal: string;
	closesLocal: string;
}

const stored = (wallClock: string) => wallClock.replace('T', ' ');

/** Errors: Refusal 'unprocessable' when hand-in would close before the report is due. */
export function mustBeInOrder(dates: Dates): void {
	if (dates.closesLocal < dates.dueLocal) {
		throw unprocessable('Hand-in closes before the report is due. Move one of the two.', {
			closesLocal: 'Not before the due time.'
		});
	}
}

async function lockAssignment(tx: Transaction, id: string) {
	const [assignment] = await tx.select().from(assignments).where(eq(assignments.id, id)).for('update');
	if (!assignment) throw notFound();
	return assignment;
}

/** Sets due and closing time. What was handed in keeps the due time it was ruled by. */
export async function changeDates(act: Act, input: Dates & { assignment: string }): Promise<Dates> {
	mustBeInOrder(input);
	return transact(act.repeatable, async (tx) => {
		const assignment = await lockAssignment(tx, input.assignment);
		await authorise(tx, act.viewer, 'assignment.change', assignment.id);
		const { dueLocal, closesLocal } = input;
		await tx
			.update(assignments)
			.set({ dueLocal: stored(dueLocal), closesLocal: stored(closesLocal) })
			.where(eq(assignments.id, assignment.id));
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: assignment.courseId,
			action: 'assignment.change',
			subjectKind: 'assignment',
			subjectId: assignment.id,
			detail: {
				before: { dueLocal: assignment.dueLocal, closesLocal: assignment.closesLocal },
				after: { dueLocal, closesLocal }
			}
		});
		return { dueLocal, closesLocal };
	});
}

/** Errors: Refusal 'unprocessable' for a person who is no student of the course, or a team of another. */
async function mustBeOfCourse(
	tx: Transaction,
	courseId: string,
	{ userId, teamId }: { userId?: string | undefined; teamId?: string | undefined }
): Promise<void> {
	const [found] = userId
		? await tx
				.select({ id: members.userId })
				.from(members)
				.where(
					and(
						eq(members.courseId, courseId),
						eq(members.userId, userId),
						eq(members.role, 'student'),
						isNull(members.leftAt)
					)
				)
		: await tx
				.select({ id: teams.id })
				.from(teams)
				.where(and(eq(teams.courseId, courseId), eq(teams.id, teamId ?? '')));
	if (found) return;
	const problem = `This ${userId ? 'person is no student' : 'team is not'} of this course. Choose one that is.`;
	throw unprocessable(problem, { [userId ? 'userId' : 'teamId']: problem });
}

/** Gives one person or one team more time; a later grant to the same replaces the earlier one. */
export async function grantExtension(
	act: Act,
	input: Dates & {
		assignment: string;
		userId?: string | undefined;
		teamId?: string | undefined;
		reason: string;
	}
): Promise<{ id: string }> {
	mustBeInOrder(input);
	if ((input.userId === undefined) === (input.teamId === undefined)) {
		throw unprocessable('Name either one person or one team.', { userId: 'One of the two.' });
	}
	return transact(act.repeatable, async (tx) => {
		const assignment = await lockAssignment(tx, input.assignment);
		await authorise(tx, act.viewer, 'assignment.change', assignment.id);
		await mustBeOfCourse(tx, assignment.courseId, input);
		const values = {
			dueLocal: stored(input.dueLocal),
			closesLocal: stored(input.closesLocal),
			reason: input.reason,
			grantedBy: act.viewer.id
		};
		const [row] = await tx
			.insert(extensions)
			.values({
				id: uuidv7(),
				assignmentId: assignment.id,
				userId: input.userId ?? null,
				teamId: input.teamId ?? null,
				...values
			})
			.onConflictDoUpdate({
				target: [extensions.assignmentId, extensions.userId, extensions.teamId],
				set: values
			})
			.returning({ id: extensions.id });
		if (!row) throw notFound();
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: assignment.courseId,
			action: 'assignment.extend',
			subjectKind: 'assignment',
			subjectId: assignment.id,
			detail: {
				userId: input.userId ?? null,
				teamId: input.teamId ?? null,
				dueLocal: input.dueLocal,
				closesLocal: input.closesLocal
			}
		});
		return { id: row.id };
	});
}
