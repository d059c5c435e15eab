import { and, asc, desc, eq, inArray, sql } from 'drizzle-orm';
import type { RemarkShape, ReplyShape } from '$lib/contracts/marking';
import type { Evaluation } from '$lib/worksheets';
import { allowed, authorise, type Viewer } from '../auth';
import { database, schema, type Database } from '../db';
import { notFound } from '../errors';
import * as reports from '../reports';
import { levelsOf, remarksOf, rubricOfMarking } from './state';

const { finalMarks, markings, releases, replies, reports: reportTable } = schema;

export interface ReturnedReport {
	report: string;
	title: string;
	returnedAt: string;
	sections: { position: number; key: string; title: string; owner: 'author' | 'team'; text: string }[];
	/** as it was handed in */
	evaluation: Evaluation;
	sha256: string;
	criteria: {
		id: string;
		title: string;
		levels: { level: number; text: string; points: number }[];
		level: number | null;
	}[];
	remarks: (RemarkShape & { replies: ReplyShape[] })[];
	/** hundredths of a point; `points` after the deduction */
	mark: { points: number; deduction: number; maximum: number; reason: string };
}

/** Where the viewer's own report on a work stands: not handed in, with a marker, or back. */
export type Returned =
	| { state: 'draft'; report: null }
	| { state: 'with-marker'; attempt: number; receivedAt: string; dueAt: string; report: null }
	| { state: 'returned'; report: ReturnedReport };

async function repliesOf(db: Database, viewer: Viewer, remarkIds: string[]) {
	const byRemark = new Map<string, ReplyShape[]>();
	if (remarkIds.length === 0) return byRemark;
	const rows = await db
		.select()
		.from(replies)
		.where(inArray(replies.remarkId, remarkIds))
		.orderBy(asc(replies.at), asc(replies.id));
	for (const { id, remarkId, byId, body, at } of rows) {
		const kept = byRemark.get(remarkId) ?? [];
		kept.push({ id, body, at: at.toISOString(), own: byId === viewer.id });
		byRemark.set(remarkId, kept);
	}
	return byRemark;
}

async function readReturned(db: Database, viewer: Viewer, reportId: string, title: string) {
	const [mark] = await db
		.select()
		.from(finalMarks)
		.where(eq(finalMarks.reportId, reportId))
		.orderBy(desc(finalMarks.n))
		.limit(1);
	const [release] = await db
		.select({ at: releases.at })
		.from(releases)
		.where(eq(releases.reportId, reportId))
		.orderBy(desc(releases.n))
		.limit(1);
	const [marking] = mark?.markingId
		? await db
				.select()
				.from(markings)
				.where(and(eq(markings.id, mark.markingId), allowed('marking.see', viewer.id, sql`${markings.id}`)))
		: [];
	if (!mark || !release || !marking) throw notFound();
	const snapshot = await reports.readSnapshot(db, marking.snapshotId);
	const rubric = await rubricOfMarking(db, marking.rubricVersionId);
	const levels = new Map((await levelsOf(db, marking.id)).map((row) => [row.criterion, row.level]));
	const remarks = await remarksOf(db, marking.id);
	const answered = await repliesOf(
		db,
		viewer,
		remarks.map(({ id }) => id)
	);
	const best = (points: number[]) => points.reduce((most, value) => Math.max(most, value), 0);
	return {
		report: reportId,
		title,
		returnedAt: release.at.toISOString(),
		sections: snapshot.sections.map(({ position, key, title: heading, owner, text }) => ({
			position,
			key,
			title: heading,
			owner,
			text
		})),
		evaluation: snapshot.evaluation,
		sha256: snapshot.sha256,
		criteria: rubric.criteria.map((criterion) => ({
			id: criterion.id,
			title: criterion.title,
			levels: criterion.levels.map(({ level, text, pointsHundredths }) => ({
				level,
				text,
				points: pointsHundredths
			})),
			level: levels.get(criterion.id) ?? null
		})),
		remarks: remarks.map((remark) => ({ ...remark, replies: answered.get(remark.id) ?? [] })),
		mark: {
			points: mark.pointsHundredths,
			deduction: mark.deductionHundredths,
			maximum: rubric.criteria.reduce(
				(sum, criterion) => sum + best(criterion.levels.map((level) => level.pointsHundredths)),
				0
			),
			reason: mark.reason
		}
	} satisfies ReturnedReport;
}

/**
 * The viewer's own report on a work as far as it has come back. Before the return it tells only that it is with a
 * marker; of a team mate's report nothing is told at any time.
 */
export async function returned(viewer: Viewer, workId: string): Promise<Returned> {
	const db = database();
	const [own] = await db
		.select({
			id: reportTable.id,
			countedSnapshotId: reportTable.countedSnapshotId,
			title: sql<string>`(select ass.title from work wk join assignments ass on ass.id = wk.assignment_id where wk.id = ${reportTable.workId})`,
			back: allowed('report.readMarks', viewer.id, sql`${reportTable.id}`)
		})
		.from(reportTable)
		.where(
			and(
				eq(reportTable.workId, workId),
				eq(reportTable.authorId, viewer.id),
				allowed('report.see', viewer.id, sql`${reportTable.id}`)
			)
		);
	if (!own) {
		// Not begun: only whoever may write one here is told so.
		await authorise(db, viewer, 'work.write', workId);
		return { state: 'draft', report: null };
	}
	if (!own.countedSnapshotId) return { state: 'draft', report: null };
	if (own.back) return { state: 'returned', report: await readReturned(db, viewer, own.id, own.title) };
	const [snapshot] = await db
		.select()
		.from(schema.snapshots)
		.where(eq(schema.snapshots.id, own.countedSnapshotId));
	if (!snapshot) throw notFound();
	return {
		state: 'with-marker',
		attempt: snapshot.attempt,
		receivedAt: snapshot.receivedAt.toISOString(),
		dueAt: snapshot.dueAt.toISOString(),
		report: null
	};
}
