import { and, eq, sql } from 'drizzle-orm';
import type { SittingReportShape, SittingShape } from '$lib/contracts/marking';
import { allowed, type Viewer } from '../auth';
import { database, schema, type Database, type Transaction } from '../db';
import { notFound } from '../errors';
import { firstName, labelOf, receivedInWords } from './label';
import { namesHidden } from './names';
import { levelsOfMany, rubricOfMarking, totalOf, type LevelRow } from './state';

const { assignments, sittings } = schema;

interface Row extends Record<string, unknown> {
	position: number;
	alias: string;
	author: string;
	received_at: Date | string;
	due_at: Date | string;
	marking_id: string | null;
	rubric_version_id: string | null;
	grader_id: string | null;
	grader: string | null;
	finished_at: Date | string | null;
	returned: boolean | null;
}

async function presentReport(
	db: Database | Transaction,
	viewer: Viewer,
	row: Row,
	levels: LevelRow[],
	hidden: boolean
): Promise<SittingReportShape> {
	const taken = row.marking_id !== null && row.grader_id !== viewer.id;
	const state = row.returned
		? 'returned'
		: taken
			? 'taken'
			: row.marking_id === null
				? 'unmarked'
				: row.finished_at === null
					? 'begun'
					: 'finished';
	return {
		position: row.position,
		alias: row.alias,
		label: labelOf(row.alias),
		author: hidden ? null : row.author,
		received: hidden ? null : receivedInWords(new Date(row.received_at), new Date(row.due_at)),
		state,
		marker: taken && row.grader ? firstName(row.grader) : null,
		// A colleague's total would lean on one's own.
		total:
			row.rubric_version_id !== null && !taken
				? totalOf(await rubricOfMarking(db, row.rubric_version_id), levels)
				: null
	};
}

const isToMark = (report: SittingReportShape) => report.state === 'unmarked' || report.state === 'begun';

/** The first of the rest that waits for this grader, from the report at `after` on and then from the start. */
export function nextReport(
	reports: readonly SittingReportShape[],
	after?: string
): { alias: string; label: string } | null {
	const from = after === undefined ? 0 : reports.findIndex((report) => report.alias === after) + 1;
	const inOrder = [...reports.slice(from), ...reports.slice(0, from)];
	const found = inOrder.find((report) => isToMark(report) && report.alias !== after);
	return found ? { alias: found.alias, label: found.label } : null;
}

/** A sitting as its own grader sees it. Errors: Refusal 'not-found' for anyone else. */
export async function sittingState(
	viewer: Viewer,
	sittingId: string,
	db: Database | Transaction = database()
): Promise<SittingShape> {
	const [sitting] = await db
		.select({ id: sittings.id, assignment: assignments })
		.from(sittings)
		.innerJoin(assignments, eq(assignments.id, sittings.assignmentId))
		.where(
			and(
				eq(sittings.id, sittingId),
				eq(sittings.graderId, viewer.id),
				allowed('assignment.mark', viewer.id, sql`${assignments.id}`)
			)
		);
	if (!sitting) throw notFound();
	// Whoever stopped grading a lab section no longer sees its reports, though the order holds them.
	const rows = await db.execute<Row>(
		sql`select sr.position, rep.alias, u.name as author, snap.received_at, snap.due_at,
				mk.id as marking_id, mk.rubric_version_id, mk.grader_id, gr.name as grader, mk.finished_at,
				(select rel.action from releases rel where rel.report_id = rep.id order by rel.n desc limit 1) = 'return' as returned
			from sitting_reports sr join reports rep on rep.id = sr.report_id join users u on u.id = rep.author_id
			join snapshots snap on snap.id = rep.counted_snapshot_id
			left join markings mk on mk.snapshot_id = snap.id and mk.kind = 'first'
			left join users gr on gr.id = mk.grader_id
			where sr.sitting_id = ${sittingId} and ${allowed('report.mark', viewer.id, sql`rep.id`)}
			order by sr.position`
	);
	const own = rows.flatMap((row) =>
		row.marking_id !== null && row.grader_id === viewer.id ? [row.marking_id] : []
	);
	const levels = await levelsOfMany(db, own);
	const hidden = await namesHidden(db, viewer, sitting.assignment);
	const reports: SittingReportShape[] = [];
	for (const row of rows)
		reports.push(await presentReport(db, viewer, row, levels.get(row.marking_id ?? '') ?? [], hidden));
	return {
		id: sitting.id,
		assignment: { id: sitting.assignment.id, title: sitting.assignment.title },
		namesHidden: hidden,
		reports,
		finished: reports.filter((report) => report.state === 'finished' || report.state === 'returned').length,
		next: nextReport(reports)
	};
}

/** The grader's sitting for an assignment, where one was opened. */
export async function sittingFor(
	viewer: Viewer,
	assignmentId: string,
	db: Database | Transaction = database()
): Promise<SittingShape | null> {
	const [own] = await db
		.select({ id: sittings.id })
		.from(sittings)
		.where(and(eq(sittings.assignmentId, assignmentId), eq(sittings.graderId, viewer.id)));
	return own ? sittingState(viewer, own.id, db) : null;
}

export const readSitting = (viewer: Viewer, sittingId: string) => sittingState(viewer, sittingId);
