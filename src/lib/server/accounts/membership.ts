import { and, eq } from 'drizzle-orm';
import * as audit from '../audit';
import { schema, type Database, type Transaction } from '../db';
import { notFound, unprocessable } from '../errors';
import * as mail from '../mail';

const { courses, gradingSections, labSections, members } = schema;

export type CourseRole = 'student' | 'grader' | 'instructor';

/** What an invitation or bench words give. */
export interface Grant {
	courseId: string;
	role: CourseRole;
	labSectionId?: string | undefined;
}

/** How letters and pages call a course. */
export const courseLabel = (course: { code: string; title: string }): string =>
	`${course.code} ${course.title}`;

export async function courseOf(db: Database | Transaction, courseId: string) {
	const [course] = await db.select().from(courses).where(eq(courses.id, courseId));
	if (!course) throw notFound();
	return course;
}

/** A lab section of this course, else Refusal 'unprocessable'. */
export async function labSectionOf(db: Database | Transaction, courseId: string, labSectionId: string) {
	const [section] = await db
		.select()
		.from(labSections)
		.where(and(eq(labSections.id, labSectionId), eq(labSections.courseId, courseId)));
	const problem = 'This lab section is not of this course. Choose one that is.';
	if (!section) throw unprocessable(problem, { labSectionId: problem });
	return section;
}

/** Makes somebody a member, says so in the record and by mail. Repeating it changes nothing but the lab section. */
export async function addMember(
	tx: Transaction,
	person: { id: string; name: string; email: string },
	grant: Grant
): Promise<void> {
	const course = await courseOf(tx, grant.courseId);
	const section = grant.labSectionId ? await labSectionOf(tx, course.id, grant.labSectionId) : undefined;
	const labSectionId = grant.role === 'student' ? (section?.id ?? null) : null;
	await tx
		.insert(members)
		.values({ courseId: course.id, userId: person.id, role: grant.role, labSectionId })
		.onConflictDoUpdate({
			target: [members.courseId, members.userId, members.role],
			set: { leftAt: null, labSectionId }
		});
	if (grant.role === 'grader' && section) {
		await tx
			.insert(gradingSections)
			.values({ labSectionId: section.id, userId: person.id })
			.onConflictDoNothing();
	}
	await mail.enqueue(tx, {
		kind: 'welcome',
		subject: `${course.id}:${grant.role}`,
		recipient: person.email,
		payload: {
			name: person.name,
			course: courseLabel(course),
			slug: course.slug,
			labSection: section?.name,
			meets: section?.meets
		}
	});
	await audit.record(tx, {
		actorId: person.id,
		courseId: course.id,
		action: 'course.join',
		subjectKind: 'course',
		subjectId: course.id,
		detail: { role: grant.role, ...(section ? { labSectionId: section.id } : {}) }
	});
}
