import { and, eq, sql } from 'drizzle-orm';
import { validate as isUuid } from 'uuid';
import { allowed, type Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound } from '../errors';

const { assignments, courses, teams, work } = schema;

export interface WorkHead {
	id: string;
	assignmentId: string;
	title: string;
	team: { id: string; name: string; members: { id: string; name: string; initials: string }[] };
	course: { id: string; slug: string; code: string; zone: string };
	/** the viewer is on the team */
	own: boolean;
}

/** A team's work, for those who may see it. Errors: Refusal 'not-found'. */
export async function workOf(viewer: Viewer, workId: string): Promise<WorkHead> {
	// Comes from a page's address, where anything may stand.
	if (!isUuid(workId)) throw notFound();
	const db = database();
	const [row] = await db
		.select({ work, assignment: assignments, team: teams, course: courses })
		.from(work)
		.innerJoin(assignments, eq(assignments.id, work.assignmentId))
		.innerJoin(teams, eq(teams.id, work.teamId))
		.innerJoin(courses, eq(courses.id, assignments.courseId))
		.where(and(eq(work.id, workId), allowed('work.see', viewer.id, sql`${work.id}`)));
	if (!row) throw notFound();
	const members = await db.execute<{ id: string; name: string; initials: string }>(
		sql`select u.id, u.name, u.initials from team_members tm join users u on u.id = tm.user_id
			where tm.team_id = ${row.team.id} and tm.during @> now() order by u.name`
	);
	return {
		id: row.work.id,
		assignmentId: row.assignment.id,
		title: row.assignment.title,
		team: {
			id: row.team.id,
			name: row.team.name,
			members: members.map(({ id, name, initials }) => ({ id, name, initials }))
		},
		course: { id: row.course.id, slug: row.course.slug, code: row.course.code, zone: row.course.zone },
		own: members.some((member) => member.id === viewer.id)
	};
}
