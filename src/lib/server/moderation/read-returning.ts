import type { ReturningReport, ReturningShape } from '$lib/contracts/moderation';
import { eq } from 'drizzle-orm';
import { authorise, type Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound } from '../errors';
import { markedReports, type Marked } from './marked';
import { undoUntil } from './undo';

function present(row: Marked, now: Date): ReturningReport {
	const isMarked = row.marking !== null;
	const until = row.returnedAt ? undoUntil(row.returnedAt) : null;
	return {
		id: row.report,
		assignment: row.assignment,
		labSection: row.labSection,
		team: row.team,
		author: row.author,
		state: row.returnedAt ? 'returned' : !isMarked ? 'unmarked' : row.finished ? 'ready' : 'begun',
		marker: row.marker,
		points: row.finished ? row.late.points : null,
		deduction: row.finished ? row.late.deduction : null,
		maximum: row.total.maximum,
		rule: row.late.deduction > 0 ? row.late.sentence : '',
		returnedAt: row.returnedAt?.toISOString() ?? null,
		undoUntil: until && until > now ? until.toISOString() : null
	};
}

/** The course's hand-ins with what stands between them and their return. For instructors, so authors are named. */
export async function readReturning(viewer: Viewer, courseId: string): Promise<ReturningShape> {
	const db = database();
	await authorise(db, viewer, 'course.return', courseId);
	const [course] = await db
		.select({ zone: schema.courses.zone })
		.from(schema.courses)
		.where(eq(schema.courses.id, courseId));
	if (!course) throw notFound();
	const rows = await markedReports(db, courseId);
	const titles = new Map(rows.map((row) => [row.assignment, row.assignmentTitle]));
	const now = new Date();
	return {
		zone: course.zone,
		assignments: [...titles].map(([id, title]) => ({ id, title })),
		reports: rows.map((row) => present(row, now))
	};
}
