import { and, eq, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { z } from 'zod';
import * as audit from '../audit';
import { authorise, digestOf, type Act } from '../auth';
import { schema, transact } from '../db';
import { notFound } from '../errors';
import { labSectionOf } from './membership';
import { parse } from './parse';
import { drawWords } from './words';

const { benchWords, courses } = schema;
const input = z.object({ course: z.uuid(), labSectionId: z.uuid() });

/** Draws four words that let whoever hears them join a lab section for a week. Earlier words of the section end. */
export async function makeBenchWords(act: Act, given: z.input<typeof input>) {
	const { course: courseId, labSectionId } = parse(input, given);
	return transact(act.repeatable, async (tx) => {
		const [course] = await tx.select().from(courses).where(eq(courses.id, courseId)).for('key share');
		if (!course) throw notFound();
		await authorise(tx, act.viewer, 'course.invite', course.id);
		const section = await labSectionOf(tx, course.id, labSectionId);
		await tx
			.update(benchWords)
			.set({ expiresAt: sql`now()` })
			.where(and(eq(benchWords.labSectionId, section.id), sql`${benchWords.expiresAt} > now()`));
		const words = drawWords();
		const [row] = await tx
			.insert(benchWords)
			.values({
				id: uuidv7(),
				courseId: course.id,
				labSectionId: section.id,
				wordsSha256: digestOf(words),
				words,
				expiresAt: sql`now() + interval '7 days'`,
				createdBy: act.viewer.id
			})
			.returning();
		if (!row) throw new Error('the words were not stored');
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: course.id,
			action: 'course.makeBenchWords',
			subjectKind: 'labSection',
			subjectId: section.id
		});
		return presentBenchWords(row, section.name);
	});
}

/** As the API shows them. */
export const presentBenchWords = (
	row: { labSectionId: string; words: string; expiresAt: Date },
	labSection: string
) => ({
	labSectionId: row.labSectionId,
	labSection,
	words: row.words,
	path: `/join/${row.words}`,
	expiresAt: row.expiresAt.toISOString()
});
