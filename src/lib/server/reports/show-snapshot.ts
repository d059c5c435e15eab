import { eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { snapshot as shape } from '$lib/contracts/reports';
import { authorise, may, type Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound } from '../errors';
import { readSnapshot } from './read-snapshot';
import { reportById } from './report-row';
import { factsOf } from './state';

/** What was handed in, for those who may see it. Errors: Refusal 'not-found'; DamagedSnapshotError. */
export async function showSnapshot(viewer: Viewer, id: string): Promise<z.input<typeof shape>> {
	const db = database();
	await authorise(db, viewer, 'snapshot.see', id);
	const [row] = await db
		.select({ reportId: schema.snapshots.reportId })
		.from(schema.snapshots)
		.where(eq(schema.snapshots.id, id));
	const report = row && (await reportById(db, row.reportId));
	if (!report) throw notFound();
	const snapshot = await readSnapshot(db, id);
	// Who may open the draft, or read the marks, knows the author; to anyone else the time of hand-in could tell.
	const knowsAuthor =
		report.authorId === viewer.id ||
		!report.hideNames ||
		(await may(db, viewer, 'report.return', report.id)) ||
		(await factsOf(db, [report.id])).get(report.id)?.returned === true;
	return {
		id: snapshot.id,
		alias: report.alias,
		attempt: snapshot.attempt,
		sha256: snapshot.sha256,
		engine: snapshot.engine,
		receivedAt: knowsAuthor ? snapshot.receivedAt.toISOString() : null,
		dueAt: knowsAuthor ? snapshot.dueAt.toISOString() : null,
		sections: snapshot.sections,
		readings: { ...snapshot.readings },
		evaluation: { ...snapshot.evaluation }
	};
}
