import { randomInt } from 'node:crypto';
import { sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { Report } from '$lib/contracts/reports';
import * as audit from '../audit';
import { authorise, type Viewer } from '../auth';
import * as courses from '../courses';
import { database, schema, type Transaction } from '../db';
import { notFound } from '../errors';
import * as experiments from '../experiments';
import * as readings from '../readings';
import { closingTimes, settleFreezing } from './freezing';
import { gatherReport, type GatheredReport } from './gather-report';
import { reportOf, type ReportRow } from './report-row';

/** The viewer's own report on a work, made at the first call. Errors as {@link openSheet}. */
export async function openReport(viewer: Viewer, workId: string): Promise<Report> {
	return (await openSheet(viewer, workId)).report;
}

/**
 * The viewer's own report with what its pages work up. At the first call it is made, with its documents; whoever wrote
 * it keeps it after leaving the team. Errors: Refusal 'not-found'; 'forbidden' for those who see the work and are not on
 * the team.
 */
export async function openSheet(viewer: Viewer, workId: string): Promise<GatheredReport> {
	const row = await database().transaction(async (tx) => {
		const report = (await reportOf(tx, workId, viewer.id)) ?? (await makeReport(tx, viewer, workId));
		await authorise(tx, viewer, 'report.see', report.id);
		const { outline } = await experiments.worksheetOf(tx, report.assignmentId);
		await readings.ensureDocuments(tx, workId, outline, viewer.id);
		const due = await courses.dueFor(tx, report.assignmentId, viewer.id);
		await settleFreezing(tx, report, await closingTimes(tx, report, due));
		return report;
	});
	return gatherReport(database(), viewer, row);
}

async function makeReport(tx: Transaction, viewer: Viewer, workId: string): Promise<ReportRow> {
	await tx.execute(sql`select 1 from work where id = ${workId} for share`);
	await authorise(tx, viewer, 'work.write', workId);
	const id = uuidv7();
	const made = await tx
		.insert(schema.reports)
		.values({ id, workId, authorId: viewer.id, alias: await freeAlias(tx) })
		.onConflictDoNothing({ target: [schema.reports.workId, schema.reports.authorId] })
		.returning({ id: schema.reports.id });
	const report = await reportOf(tx, workId, viewer.id);
	if (!report) throw notFound();
	if (made.length > 0) {
		await audit.record(tx, {
			actorId: viewer.id,
			courseId: report.courseId,
			action: 'report.open',
			subjectKind: 'report',
			subjectId: id
		});
	}
	return report;
}

// Minerals: teams are often called after trees or animals, and a report must not seem to belong to one.
const minerals = [
	'agate',
	'beryl',
	'calcite',
	'dolomite',
	'feldspar',
	'fluorite',
	'garnet',
	'gypsum',
	'mica',
	'olivine',
	'quartz',
	'zircon'
];
const letters = '0123456789abcdefghijklmnopqrstuvwxyz';

/** Random, and nothing of the author or the time in it: 'garnet-4k9q2m1x'. */
const alias = (): string =>
	`${minerals[randomInt(minerals.length)]}-${Array.from({ length: 8 }, () => letters[randomInt(letters.length)]).join('')}`;

async function freeAlias(tx: Transaction): Promise<string> {
	for (;;) {
		const candidate = alias();
		const taken = await tx.execute(sql`select 1 from reports where alias = ${candidate}`);
		if (taken.length === 0) return candidate;
	}
}
