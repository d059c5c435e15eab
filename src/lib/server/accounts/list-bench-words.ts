import { and, asc, eq, sql } from 'drizzle-orm';
import { allowed, authorise, type Viewer } from '../auth';
import { database, schema } from '../db';
import { presentBenchWords } from './make-bench-words';

const { benchWords, labSections } = schema;

/** The words that let people join now, for whoever may invite. */
export async function listBenchWords(viewer: Viewer, courseId: string) {
	const db = database();
	await authorise(db, viewer, 'course.invite', courseId);
	const rows = await db
		.select({ words: benchWords, labSection: labSections.name })
		.from(benchWords)
		.innerJoin(labSections, eq(labSections.id, benchWords.labSectionId))
		.where(
			and(
				eq(benchWords.courseId, courseId),
				sql`${benchWords.expiresAt} > now()`,
				allowed('course.invite', viewer.id, sql`${benchWords.courseId}`)
			)
		)
		.orderBy(asc(labSections.name));
	return rows.map((row) => presentBenchWords(row.words, row.labSection));
}
