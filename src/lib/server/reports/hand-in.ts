import { eq, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { HandedIn } from '$lib/contracts/reports';
import { latePenalty } from '$lib/rubrics';
import { compareResults, shownResults, type ShownResult } from '$lib/reports';
import { engineVersion, evaluate, type Evaluation } from '$lib/worksheets';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import * as courses from '../courses';
import { schema, transact, type Transaction } from '../db';
import { conflict, notFound, tooLate, unprocessable } from '../errors';
import { presentAttempt } from './attempts';
import { hex } from './canonical';
import { currentContent, type CurrentContent } from './current-content';
import { mailReceipt } from './mail-receipt';
import { lockReport, type ReportRow } from './report-row';
import { factsOf } from './state';
import { storeSnapshot } from './store-snapshot';

/**
 * Hands a report in as it is stored: one immutable snapshot with a hash, and a receipt by mail. Nothing is frozen by it;
 * until hand-in closes it may be repeated, and the newest counts.
 * Errors: Refusal 'too-late' after closing; 'conflict' when returned already, or when the results shown are not the
 * results computed (with both sides); 'unprocessable' when nothing is written.
 */
export async function handIn(
	act: Act,
	input: { report: string; engine: string; results: Record<string, ShownResult> }
): Promise<HandedIn> {
	return transact(act.repeatable, async (tx) => {
		const report = await lockReport(tx, input.report);
		if (!report) throw notFound();
		await authorise(tx, act.viewer, 'report.handIn', report.id);
		const receivedAt = await beginning(tx);
		const due = await courses.dueFor(tx, report.assignmentId, report.authorId);
		const penalty = latePenalty(due.rule, due.dueAt.getTime(), receivedAt.getTime());
		if (receivedAt >= due.closesAt) {
			throw tooLate(`Hand-in closed ${said(due.closesLocal)}. Ask your instructor about more time.`);
		}
		if (penalty.refused) throw tooLate(penalty.sentence);
		const facts = (await factsOf(tx, [report.id])).get(report.id);
		if (facts?.returned) {
			throw conflict(
				'This report has been returned with its marks. Ask your instructor before handing in again.'
			);
		}
		const content = await currentContent(tx, report);
		if (content.sections.every((section) => section.text.trim() === '')) {
			throw unprocessable('Nothing is written yet. Write a section, then hand in.');
		}
		const evaluation = evaluate(content.worksheet, content.readings);
		mustAgree(input, evaluation);
		const snapshot = await storeSnapshot(tx, {
			id: uuidv7(),
			report,
			attempt: await nextAttempt(tx, report),
			byId: act.viewer.id,
			receivedAt,
			dueAt: due.dueAt,
			content,
			evaluation
		});
		await tx
			.update(schema.reports)
			.set({ countedSnapshotId: snapshot.id })
			.where(eq(schema.reports.id, report.id));
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: report.courseId,
			action: 'report.handIn',
			subjectKind: 'report',
			subjectId: report.id,
			detail: { snapshot: snapshot.id, attempt: snapshot.attempt, sha256: hex(snapshot.manifest) }
		});
		const receiptTo = await mailReceipt(tx, report, snapshot, { due, penalty, content: outlineOf(content) });
		return {
			report: report.id,
			attempt: presentAttempt({ ...snapshot, counts: true }, due.rule),
			receiptTo
		};
	});
}

/** "Received" is when the transaction began, before any wait for a lock: whoever queued at the deadline was in time. */
async function beginning(tx: Transaction): Promise<Date> {
	const [row] = await tx.execute<{ ms: number }>(
		sql`select floor(extract(epoch from now()) * 1000)::float8 as ms`
	);
	if (!row) throw new Error('the database did not say what time it is');
	return new Date(row.ms);
}

async function nextAttempt(tx: Transaction, report: ReportRow): Promise<number> {
	const [row] = await tx.execute<{ n: number }>(
		sql`select coalesce(max(attempt), 0)::int + 1 as n from snapshots where report_id = ${report.id}`
	);
	return row?.n ?? 1;
}

/** Nobody hands in numbers that they did not see. */
function mustAgree(
	shown: { engine: string; results: Record<string, ShownResult> },
	evaluation: Evaluation
): void {
	const differences = compareResults(shown.results, shownResults(evaluation));
	if (differences.length === 0) return;
	const names = differences.map(({ name }) => name).join(', ');
	const why =
		shown.engine === engineVersion
			? 'The readings have changed since, or not all of them are stored. Look at the values again, then hand in.'
			: 'This page computes with another version. Load it anew, look at the values, then hand in.';
	throw conflict(`The values shown are not those stored: ${names}. ${why}`, { differences });
}

const outlineOf = (content: CurrentContent) =>
	content.sections.map(({ position, title, text }) => ({ position, title, written: text.trim() !== '' }));

/** '2026-12-04 17:00:00' as people of the course say it: '4 December 2026, 17:00'. */
function said(local: string): string {
	const [date = '', time = ''] = local.replace('T', ' ').split(' ');
	const day = new Intl.DateTimeFormat('en-GB', {
		day: 'numeric',
		month: 'long',
		year: 'numeric',
		timeZone: 'UTC'
	}).format(new Date(`${date}T00:00:00Z`));
	return `${day}, ${time.slice(0, 5)}`;
}
