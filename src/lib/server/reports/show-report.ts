import type { Report } from '$lib/contracts/reports';
import { authorise, may, type Viewer } from '../auth';
import { database } from '../db';
import { forbidden, notFound } from '../errors';
import { gatherReport } from './gather-report';
import { reportById } from './report-row';

/**
 * A report in its present state, for its author and the course's instructors. Whoever marks reads the snapshot that was
 * handed in, not the draft. Errors: Refusal 'not-found', 'forbidden'.
 */
export async function showReport(viewer: Viewer, id: string): Promise<Report> {
	const db = database();
	await authorise(db, viewer, 'report.see', id);
	const report = await reportById(db, id);
	if (!report) throw notFound();
	const mayReadDraft = report.authorId === viewer.id || (await may(db, viewer, 'report.return', id));
	if (!mayReadDraft) throw forbidden('A draft is its author’s. Read what was handed in.');
	return (await gatherReport(db, viewer, report)).report;
}
