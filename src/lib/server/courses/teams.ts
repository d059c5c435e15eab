import { and, eq, isNull, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import * as audit from '../audit';
import { authorise, ringRevoked, type Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, notFound } from '../errors';

const { labSections, members, teamMembers, teams } = schema;

/** Adds a team to a lab section. */
export async function addTeam(
	act: Act,
	input: { courseId: string; labSectionId: string; name: string }
): Promise<{ id: string }> {
	return transact(act.repeatable, async (tx) => {
		const [section] = await tx
			.select()
			.from(labSections)
			.where(and(eq(labSections.id, input.labSectionId), eq(labSections.courseId, input.courseId)))
			.for('share');
		await authorise(tx, act.viewer, 'course.change', input.courseId);
		if (!section) throw notFound();
		const id = uuidv7();
		const [made] = await tx
			.insert(teams)
			.values({ id, courseId: input.courseId, labSectionId: section.id, name: input.name })
			.onConflictDoNothing()
			.returning({ id: teams.id });
		if (!made) throw conflict(`There is a team ${input.name} already. Choose another name.`);
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: input.courseId,
			action: 'team.add',
			subjectKind: 'team',
			subjectId: id
		});
		return { id };
	});
}

/**
 * Puts a student on a team from now on, ending an earlier membership at the same moment; null takes the student off.
 * What was written with the earlier team stays with it.
 */
export async function placeInTeam(
	act: Act,
	input: { courseId: string; userId: string; teamId: string | null }
): Promise<{ teamId: string | null }> {
	return transact(act.repeatable, async (tx) => {
		const [member] = await tx
			.select()
			.from(members)
			.where(
				and(
					eq(members.courseId, input.courseId),
					eq(members.userId, input.userId),
					eq(members.role, 'student'),
					isNull(members.leftAt)
				)
			)
			.for('update');
		await authorise(tx, act.viewer, 'course.change', input.courseId);
		if (!member) throw notFound();
		const inCourse = and(eq(teamMembers.courseId, input.courseId), eq(teamMembers.userId, input.userId));
		const [present] = await tx
			.select()
			.from(teamMembers)
			.where(and(inCourse, sql`${teamMembers.during} @> now()`));
		if (present?.teamId === (input.teamId ?? undefined)) return { teamId: input.teamId };
		if (input.teamId) {
			const [team] = await tx
				.select({ id: teams.id })
				.from(teams)
				.where(and(eq(teams.id, input.teamId), eq(teams.courseId, input.courseId)));
			if (!team) throw notFound();
		}
		if (present) {
			await tx
				.update(teamMembers)
				.set({ during: sql`tstzrange(lower(${teamMembers.during}), now())` as never })
				.where(eq(teamMembers.id, present.id));
		}
		if (input.teamId) {
			await tx.insert(teamMembers).values({
				id: uuidv7(),
				teamId: input.teamId,
				courseId: input.courseId,
				userId: input.userId,
				during: sql`tstzrange(now(), null)` as never
			});
		}
		// Open live documents of the earlier team close at once.
		await ringRevoked(tx, input.userId);
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: input.courseId,
			action: 'team.place',
			subjectKind: 'user',
			subjectId: input.userId,
			detail: { from: present?.teamId ?? null, to: input.teamId }
		});
		return { teamId: input.teamId };
	});
}
