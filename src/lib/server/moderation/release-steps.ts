import { eq, inArray, sql } from 'drizzle-orm';
import { authorise, type Act } from '../auth';
import { schema, type Transaction } from '../db';
import { notFound } from '../errors';
import { markedReports, type Marked } from './marked';

const { markings, reports } = schema;

/**
 * Locks the reports and their markings in one order, so that two instructors wait for each other instead of blocking each
 * other, and asks for each whether this person may return it. All of them belong to the course, or none is touched.
 */
export async function lockReports(
	tx: Transaction,
	act: Act,
	courseId: string,
	chosen: readonly string[]
): Promise<Marked[]> {
	const ids = [...new Set(chosen)].sort();
	await tx
		.select({ id: reports.id })
		.from(reports)
		.where(inArray(reports.id, ids))
		.orderBy(reports.id)
		.for('update');
	for (const id of ids) await authorise(tx, act.viewer, 'report.return', id);
	const rows = await markedReports(tx, courseId, { reports: ids });
	if (rows.length !== ids.length) throw notFound();
	const markingIds = rows.flatMap((row) => (row.marking === null ? [] : [row.marking]));
	if (markingIds.length > 0) {
		await tx
			.select({ id: markings.id })
			.from(markings)
			.where(inArray(markings.id, markingIds))
			.orderBy(markings.id)
			.for('update');
	}
	// Read again: a marking may have been reopened, or levels changed, while the locks were waited for.
	return markedReports(tx, courseId, { reports: ids });
}

export async function nextRelease(tx: Transaction, report: string): Promise<number> {
	const [row] = await tx.execute<{ n: number | null }>(
		sql`select max(n) as n from releases where report_id = ${report}`
	);
	return (row?.n ?? 0) + 1;
}

export async function nextFinalMark(tx: Transaction, report: string): Promise<number> {
	const [row] = await tx.execute<{ n: number | null }>(
		sql`select max(n) as n from final_marks where report_id = ${report}`
	);
	return (row?.n ?? 0) + 1;
}

/** The transaction's own instant, which the rows written in it carry. */
export async function transactionTime(tx: Transaction): Promise<Date> {
	const [row] = await tx.execute<{ at: Date | string }>(sql`select now() as at`);
	return new Date(row?.at ?? Date.now());
}

export async function courseHead(tx: Transaction, courseId: string) {
	const [course] = await tx
		.select({ code: schema.courses.code, slug: schema.courses.slug })
		.from(schema.courses)
		.where(eq(schema.courses.id, courseId));
	if (!course) throw notFound();
	return course;
}
