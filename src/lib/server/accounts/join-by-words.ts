import { and, eq, isNull } from 'drizzle-orm';
import type { Act } from '../auth';
import { schema, transact } from '../db';
import { conflict } from '../errors';
import { addMember, courseLabel } from './membership';
import { lockPerson } from './people';
import { sectionOfGuessedWords, sectionOfWords } from './words';

const { labSections, members } = schema;

/** Somebody signed in joins a lab section as a student at once. */
export async function joinByWords(act: Act, given: { words: string }) {
	await sectionOfGuessedWords(act.viewer.id, given.words);
	return transact(act.repeatable, async (tx) => {
		const person = await lockPerson(tx, act.viewer.id);
		const { course, section } = await sectionOfWords(given.words, tx);
		const [member] = await tx
			.select({ role: members.role, section: labSections.name })
			.from(members)
			.leftJoin(labSections, eq(labSections.id, members.labSectionId))
			.where(and(eq(members.courseId, course.id), eq(members.userId, person.id), isNull(members.leftAt)));
		if (member) {
			throw conflict(
				member.role === 'student'
					? `You are in ${courseLabel(course)}${member.section ? `, ${member.section}` : ''} already. Ask your instructor to move you.`
					: `You are in ${courseLabel(course)} as ${member.role} already.`
			);
		}
		await addMember(tx, person, { courseId: course.id, role: 'student', labSectionId: section.id });
		return { courseId: course.id, slug: course.slug, labSection: section.name };
	});
}
