import { and, eq, sql } from 'drizzle-orm';
import type { MarkingState, SittingShape } from '$lib/contracts/marking';
import { evaluate, type Evaluation, type Readings } from '$lib/worksheets';
import { allowed, type Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound } from '../errors';
import type { StoredRubric } from '../experiments';
import * as reports from '../reports';
import { firstName, labelOf } from './label';
import { namesHidden } from './names';
import { nextReport, sittingFor } from './read-sitting';
import { editionOf, rubricOfMarking, stateOf } from './state';

/** A report under marking: what was handed in, recomputed, with the marking where there is one. */
export interface MarkingSheet {
	alias: string;
	label: string;
	title: string;
	edition: string;
	/** null while names are hidden */
	author: string | null;
	sections: { position: number; key: string; title: string; owner: 'author' | 'team'; text: string }[];
	readings: Readings;
	/** recomputed now from the readings that were handed in, by the engine of this server */
	evaluation: Evaluation;
	/** the engine that made the results shown at hand-in, when another computes now */
	otherEngine: string | null;
	rubric: StoredRubric;
	marking: MarkingState | null;
	/** first name of the grader who has it, when that is another */
	takenBy: string | null;
	/** with its author again */
	returned: boolean;
	place: number;
	of: number;
	finished: number;
	sitting: string | null;
	next: { alias: string; label: string } | null;
}

const { assignments, courses, markings, reports: reportTable, users, work } = schema;

async function findReport(viewer: Viewer, course: string, alias: string) {
	const [row] = await database()
		.select({
			id: reportTable.id,
			snapshotId: reportTable.countedSnapshotId,
			author: users.name,
			assignment: assignments,
			returned: sql<
				boolean | null
			>`(select rel.action from releases rel where rel.report_id = ${reportTable.id} order by rel.n desc limit 1) = 'return'`
		})
		.from(reportTable)
		.innerJoin(work, eq(work.id, reportTable.workId))
		.innerJoin(assignments, eq(assignments.id, work.assignmentId))
		.innerJoin(courses, eq(courses.id, assignments.courseId))
		.innerJoin(users, eq(users.id, reportTable.authorId))
		.where(
			and(
				eq(reportTable.alias, alias),
				eq(courses.slug, course),
				allowed('report.mark', viewer.id, sql`${reportTable.id}`)
			)
		);
	if (!row?.snapshotId) throw notFound();
	return { ...row, snapshotId: row.snapshotId };
}

function placeIn(sitting: SittingShape | null, alias: string) {
	const found = sitting?.reports.find((report) => report.alias === alias);
	return {
		place: found?.position ?? 0,
		of: sitting?.reports.length ?? 0,
		finished: sitting?.finished ?? 0,
		sitting: sitting?.id ?? null,
		next: sitting ? nextReport(sitting.reports, alias) : null
	};
}

/**
 * The sheet a grader marks on. Reading begins nothing: the marking is made by openMarking once the page is really open.
 * Errors: Refusal 'not-found' outside the person's own lab sections.
 */
export async function openSheet(
	viewer: Viewer,
	input: { course: string; alias: string }
): Promise<MarkingSheet> {
	const db = database();
	const report = await findReport(viewer, input.course, input.alias);
	const snapshot = await reports.readSnapshot(db, report.snapshotId);
	const [first] = await db
		.select({
			id: markings.id,
			graderId: markings.graderId,
			grader: users.name,
			rubric: markings.rubricVersionId
		})
		.from(markings)
		.innerJoin(users, eq(users.id, markings.graderId))
		.where(and(eq(markings.snapshotId, report.snapshotId), eq(markings.kind, 'first')));
	const own = first?.graderId === viewer.id ? first : null;
	const sitting = await sittingFor(viewer, report.assignment.id);
	const hidden = await namesHidden(db, viewer, report.assignment);
	const evaluation = evaluate(snapshot.worksheet, snapshot.readings);
	return {
		alias: input.alias,
		label: labelOf(input.alias),
		title: report.assignment.title,
		edition: editionOf(snapshot.sha256),
		author: hidden ? null : report.author,
		sections: snapshot.sections.map(({ position, key, title, owner, text }) => ({
			position,
			key,
			title,
			owner,
			text
		})),
		readings: snapshot.readings,
		evaluation,
		otherEngine: snapshot.engine === evaluation.engine ? null : snapshot.engine,
		rubric: await rubricOfMarking(db, own?.rubric ?? report.assignment.rubricVersionId),
		marking: own ? await stateOf(db, own.id) : null,
		takenBy: first && !own ? firstName(first.grader) : null,
		returned: report.returned ?? false,
		...placeIn(sitting, input.alias)
	};
}
