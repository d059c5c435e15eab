import { and, eq, isNull, sql } from 'drizzle-orm';
import { z } from 'zod';
import { invitationBody } from '$lib/contracts/accounts';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, notFound } from '../errors';
import * as mail from '../mail';
import { courseLabel, labSectionOf, type Grant } from './membership';
import { parse } from './parse';
import { issueToken } from './tokens';

const { accountTokens, courses, members, users } = schema;
const input = invitationBody.extend({ course: z.uuid() });

/** What an invitation's row carries. */
export interface InvitationGrant extends Grant {
	name?: string | undefined;
}

/** Mails somebody a link into a course. A new invitation for the same address and role replaces an open one. */
export async function invite(act: Act, given: z.input<typeof input>) {
	const { course: courseId, email, role, labSectionId, name } = parse(input, given);
	return transact(act.repeatable, async (tx) => {
		const [course] = await tx.select().from(courses).where(eq(courses.id, courseId)).for('key share');
		if (!course) throw notFound();
		await authorise(tx, act.viewer, 'course.invite', course.id);
		if (labSectionId) await labSectionOf(tx, course.id, labSectionId);
		const [member] = await tx
			.select({ name: users.name })
			.from(members)
			.innerJoin(users, eq(users.id, members.userId))
			.where(
				and(
					eq(members.courseId, course.id),
					eq(members.role, role),
					eq(users.email, email),
					isNull(members.leftAt)
				)
			);
		if (member) throw conflict(`${member.name} is in this course as ${role} already.`);
		await tx
			.update(accountTokens)
			.set({ expiresAt: sql`now()` })
			.where(
				and(
					eq(accountTokens.kind, 'invitation'),
					eq(accountTokens.email, email),
					isNull(accountTokens.usedAt),
					sql`${accountTokens.grants} ->> 'courseId' = ${course.id} and ${accountTokens.grants} ->> 'role' = ${role}`
				)
			);
		const grants: InvitationGrant = { courseId: course.id, role, labSectionId, name };
		const { token, subject, expiresAt } = await issueToken(tx, 'invitation', { email, grants });
		await mail.enqueue(tx, {
			kind: 'invitation',
			subject,
			recipient: email,
			payload: {
				token,
				course: courseLabel(course),
				institution: course.institution,
				role,
				from: act.viewer.name,
				name,
				until: dayIn(course.zone, expiresAt)
			}
		});
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: course.id,
			action: 'course.invite',
			subjectKind: 'course',
			subjectId: course.id,
			detail: { email, role, ...(labSectionId ? { labSectionId } : {}) }
		});
		return { email, role, expiresAt: expiresAt.toISOString() };
	});
}

const dayIn = (zone: string, instant: Date) =>
	new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', timeZone: zone }).format(instant);
