import { eq } from 'drizzle-orm';
import type { LatePenalty } from '$lib/rubrics';
import type { Due } from '../courses';
import { schema, type Transaction } from '../db';
import { notFound } from '../errors';
import * as mail from '../mail';
import { hex } from './canonical';
import type { ReportRow } from './report-row';
import type { StoredSnapshot } from './store-snapshot';

/** Step: the receipt, to the author. Returns the address. */
export async function mailReceipt(
	tx: Transaction,
	report: ReportRow,
	snapshot: StoredSnapshot,
	told: {
		due: Due;
		penalty: LatePenalty;
		content: { position: number; title: string; written: boolean }[];
	}
): Promise<string> {
	const { assignments, courses, users } = schema;
	const [row] = await tx
		.select({ name: users.name, email: users.email, course: courses, title: assignments.title })
		.from(users)
		.innerJoin(assignments, eq(assignments.id, report.assignmentId))
		.innerJoin(courses, eq(courses.id, assignments.courseId))
		.where(eq(users.id, report.authorId));
	if (!row) throw notFound();
	await mail.enqueue(tx, {
		kind: 'receipt',
		subject: `snapshot:${snapshot.id}`,
		recipient: row.email,
		payload: {
			name: row.name,
			course: `${row.course.code} ${row.course.title}`,
			title: row.title,
			attempt: snapshot.attempt,
			sha256: hex(snapshot.manifest),
			receivedAt: snapshot.receivedAt.toISOString(),
			dueAt: snapshot.dueAt.toISOString(),
			closesAt: told.due.closesAt.toISOString(),
			zone: told.due.zone,
			lateness: told.penalty.sentence,
			sections: told.content,
			path: `/c/${row.course.slug}/w/${report.workId}/hand-in`
		}
	});
	return row.email;
}
