import { sql } from 'drizzle-orm';
import { finalMark, latePenalty, type LateRule } from '$lib/rubrics';
import type { Database, Transaction } from '../db';
import * as marking from '../marking';
import type { StoredRubric } from '../experiments';

/** A counted hand-in with its first marking. Points in hundredths. */
export interface Marked {
	report: string;
	alias: string;
	assignment: string;
	assignmentTitle: string;
	work: string;
	labSection: string;
	team: string;
	authorId: string;
	author: string;
	email: string;
	marking: string | null;
	marker: string | null;
	finished: boolean;
	/** the newest release, when the report is with its author now */
	returnedAt: Date | null;
	rubric: StoredRubric;
	levels: { criterion: string; level: number; points: number }[];
	total: { points: number; maximum: number };
	/** by the course's late rule: what is left, what is taken, and the rule in words */
	late: { points: number; deduction: number; sentence: string };
}

interface Row extends Record<string, unknown> {
	report: string;
	alias: string;
	assignment: string;
	title: string;
	work: string;
	lab_section: string;
	team: string;
	author_id: string;
	author: string;
	email: string;
	marking: string | null;
	marker: string | null;
	finished_at: Date | string | null;
	rubric_version_id: string;
	late_rule: LateRule;
	received_at: Date | string;
	due_at: Date | string;
	release_action: string | null;
	released_at: Date | string | null;
}

const hundredths = (points: number) => Math.round(points * 100);

/**
 * Every counted hand-in of a course, or of one assignment or some reports of it, in the order of lab section, team and
 * author. Lateness is ruled by the due instant that held at hand-in.
 */
export async function markedReports(
	db: Database | Transaction,
	courseId: string,
	only: { assignment?: string | undefined; reports?: readonly string[] } = {}
): Promise<Marked[]> {
	const rows = await db.execute<Row>(
		sql`select rep.id as report, rep.alias, ass.id as assignment, ass.title, wk.id as work, ls.name as lab_section,
				tm.name as team, u.id as author_id, u.name as author, u.email, mk.id as marking, gr.name as marker, mk.finished_at,
				coalesce(mk.rubric_version_id, ass.rubric_version_id) as rubric_version_id, co.late_rule, snap.received_at, snap.due_at,
				rel.action as release_action, rel.created_at as released_at
			from reports rep join work wk on wk.id = rep.work_id join assignments ass on ass.id = wk.assignment_id
			join courses co on co.id = ass.course_id join teams tm on tm.id = wk.team_id
			join lab_sections ls on ls.id = tm.lab_section_id join users u on u.id = rep.author_id
			join snapshots snap on snap.id = rep.counted_snapshot_id
			left join markings mk on mk.snapshot_id = snap.id and mk.kind = 'first'
			left join users gr on gr.id = mk.grader_id
			left join lateral (select * from releases x where x.report_id = rep.id order by x.n desc limit 1) rel on true
			where ass.course_id = ${courseId}
			${only.assignment ? sql`and ass.id = ${only.assignment}` : sql``}
			${only.reports ? (only.reports.length > 0 ? sql`and rep.id in ${[...only.reports]}` : sql`and false`) : sql``}
			order by ass.position, ls.name, tm.name, u.name, rep.id`
	);
	const levels = await marking.levelsOfMany(
		db,
		rows.flatMap((row) => (row.marking === null ? [] : [row.marking]))
	);
	const result: Marked[] = [];
	for (const row of rows) {
		const rubric = await marking.rubricOfMarking(db, row.rubric_version_id);
		const inForce = row.marking === null ? [] : (levels.get(row.marking) ?? []);
		const { points, maximum } = marking.totalOf(rubric, inForce);
		const penalty = latePenalty(
			row.late_rule,
			new Date(row.due_at).getTime(),
			new Date(row.received_at).getTime()
		);
		const left = finalMark(points / 100, penalty);
		result.push({
			report: row.report,
			alias: row.alias,
			assignment: row.assignment,
			assignmentTitle: row.title,
			work: row.work,
			labSection: row.lab_section,
			team: row.team,
			authorId: row.author_id,
			author: row.author,
			email: row.email,
			marking: row.marking,
			marker: row.marker,
			finished: row.finished_at !== null,
			returnedAt:
				row.release_action === 'return' && row.released_at !== null ? new Date(row.released_at) : null,
			rubric,
			levels: inForce,
			total: { points, maximum },
			late: {
				points: hundredths(left.points),
				deduction: hundredths(left.taken),
				sentence: penalty.sentence
			}
		});
	}
	return result;
}
