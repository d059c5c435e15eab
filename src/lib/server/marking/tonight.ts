import { sql } from 'drizzle-orm';
import { allowed, authorise, type Viewer } from '../auth';
import { database } from '../db';

export interface ToMark {
	assignment: string;
	title: string;
	/** handed in, in the lab sections this person grades */
	handedIn: number;
	/** neither marked nor begun by somebody else */
	waiting: number;
}

/** What a grader has to mark in a course, assignments in the course's order; those without a hand-in are left out. */
export async function tonight(viewer: Viewer, courseId: string): Promise<ToMark[]> {
	const db = database();
	await authorise(db, viewer, 'course.mark', courseId);
	const rows = await db.execute<{ id: string; title: string; handed_in: number; waiting: number }>(
		sql`select ass.id, ass.title, count(*)::int as handed_in,
				count(*) filter (where mk.id is null or (mk.grader_id = ${viewer.id} and mk.finished_at is null))::int as waiting
			from assignments ass join work wk on wk.assignment_id = ass.id join reports rep on rep.work_id = wk.id
			left join markings mk on mk.snapshot_id = rep.counted_snapshot_id and mk.kind = 'first'
			where ass.course_id = ${courseId} and rep.counted_snapshot_id is not null
			and ${allowed('report.mark', viewer.id, sql`rep.id`)}
			group by ass.id order by ass.position`
	);
	return rows.map((row) => ({
		assignment: row.id,
		title: row.title,
		handedIn: row.handed_in,
		waiting: row.waiting
	}));
}
