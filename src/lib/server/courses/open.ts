import { and, asc, eq, isNull, sql } from 'drizzle-orm';
import { allowed, type Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound } from '../errors';

const {
	assignments,
	courses,
	experiments,
	experimentVersions,
	labSections,
	members,
	teamMembers,
	teams,
	work
} = schema;

export type CourseRole = 'student' | 'grader' | 'instructor';

export interface CourseHead {
	id: string;
	slug: string;
	code: string;
	title: string;
	institution: string;
	zone: string;
	roles: CourseRole[];
}

/** The course at an address, for someone who belongs to it. Errors: Refusal 'not-found'. */
export async function open(viewer: Viewer, slug: string): Promise<CourseHead> {
	const db = database();
	const [course] = await db
		.select()
		.from(courses)
		.where(and(eq(courses.slug, slug), allowed('course.see', viewer.id, sql`${courses.id}`)));
	if (!course) throw notFound();
	const roles = await db
		.select({ role: members.role })
		.from(members)
		.where(and(eq(members.courseId, course.id), eq(members.userId, viewer.id), isNull(members.leftAt)));
	const { id, code, title, institution, zone } = course;
	return {
		id,
		slug: course.slug,
		code,
		title,
		institution,
		zone,
		roles: roles.map((m) => m.role as CourseRole)
	};
}

/** All courses a person belongs to. */
export async function mine(viewer: Viewer): Promise<{ slug: string; code: string; title: string }[]> {
	return database()
		.select({ slug: courses.slug, code: courses.code, title: courses.title })
		.from(courses)
		.where(allowed('course.see', viewer.id, sql`${courses.id}`))
		.orderBy(asc(courses.code));
}

export interface RotationRow {
	assignmentId: string;
	title: string;
	experiment: string;
	dueLocal: string;
	closesLocal: string;
	/** the viewer's own work, if on a team that has one */
	workId: string | null;
	team: string | null;
}

/** The course's assignments in order, with the viewer's own work on each. */
export async function rotation(viewer: Viewer, courseId: string): Promise<RotationRow[]> {
	const own = database()
		.select({ workId: work.id, assignmentId: work.assignmentId, team: teams.name })
		.from(work)
		.innerJoin(teams, eq(teams.id, work.teamId))
		.innerJoin(
			teamMembers,
			and(
				eq(teamMembers.teamId, teams.id),
				eq(teamMembers.userId, viewer.id),
				sql`${teamMembers.during} @> now()`
			)
		)
		.as('own');
	return database()
		.select({
			assignmentId: assignments.id,
			title: assignments.title,
			experiment: experiments.title,
			dueLocal: assignments.dueLocal,
			closesLocal: assignments.closesLocal,
			workId: own.workId,
			team: own.team
		})
		.from(assignments)
		.innerJoin(experimentVersions, eq(experimentVersions.id, assignments.experimentVersionId))
		.innerJoin(experiments, eq(experiments.id, experimentVersions.experimentId))
		.leftJoin(own, eq(own.assignmentId, assignments.id))
		.where(
			and(eq(assignments.courseId, courseId), allowed('assignment.see', viewer.id, sql`${assignments.id}`))
		)
		.orderBy(asc(assignments.position));
}

export interface LabSectionRow {
	id: string;
	name: string;
	meets: string;
	students: number;
	teams: { id: string; name: string; members: string[] }[];
	graders: string[];
}

/** Lab sections with their teams and people, for the course's own staff and members. */
export async function sections(viewer: Viewer, courseId: string): Promise<LabSectionRow[]> {
	const rows = await database().execute<{
		id: string;
		name: string;
		meets: string;
		students: number;
		graders: string[] | null;
		team_id: string | null;
		team: string | null;
		members: string[] | null;
	}>(sql`
		select ls.id, ls.name, ls.meets,
			(select count(*)::int from members m where m.lab_section_id = ls.id and m.role = 'student' and m.left_at is null) as students,
			(select array_agg(u.name order by u.name) from grading_sections g join users u on u.id = g.user_id where g.lab_section_id = ls.id) as graders,
			t.id as team_id, t.name as team,
			(select array_agg(u.name order by u.name) from team_members tm join users u on u.id = tm.user_id where tm.team_id = t.id and tm.during @> now()) as members
		from ${labSections} ls left join ${teams} t on t.lab_section_id = ls.id
		where ls.course_id = ${courseId} and ${allowed('course.see', viewer.id, courseId)}
		order by ls.id, t.name`);
	const byId = new Map<string, LabSectionRow>();
	for (const row of rows) {
		const { id, name, meets, students } = row;
		const section = byId.get(id) ?? { id, name, meets, students, teams: [], graders: row.graders ?? [] };
		if (row.team_id && row.team)
			section.teams.push({ id: row.team_id, name: row.team, members: row.members ?? [] });
		byId.set(id, section);
	}
	return [...byId.values()];
}
