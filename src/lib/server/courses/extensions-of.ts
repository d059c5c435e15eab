import { sql } from 'drizzle-orm';
import { authorise, type Viewer } from '../auth';
import { database } from '../db';

export interface ExtensionRow {
	id: string;
	assignmentId: string;
	/** the person's name, or "Team Linden" */
	whose: string;
	dueLocal: string;
	closesLocal: string;
	reason: string;
}

/** Extensions granted in a course, soonest first. For instructors. */
export async function extensionsOf(viewer: Viewer, courseId: string): Promise<ExtensionRow[]> {
	const db = database();
	await authorise(db, viewer, 'course.change', courseId);
	const rows = await db.execute<{
		id: string;
		assignment_id: string;
		whose: string;
		due_local: string;
		closes_local: string;
		reason: string;
	}>(sql`
		select e.id, e.assignment_id, coalesce(u.name, 'Team ' || t.name) as whose,
			e.due_local::text as due_local, e.closes_local::text as closes_local, e.reason
		from extensions e join assignments asg on asg.id = e.assignment_id
		left join users u on u.id = e.user_id left join teams t on t.id = e.team_id
		where asg.course_id = ${courseId} order by e.due_local, whose`);
	return rows.map((row) => ({
		id: row.id,
		assignmentId: row.assignment_id,
		whose: row.whose,
		dueLocal: row.due_local,
		closesLocal: row.closes_local,
		reason: row.reason
	}));
}
