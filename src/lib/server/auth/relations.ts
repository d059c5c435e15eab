import { sql, type SQL } from 'drizzle-orm';

/**
 * Relations between a person and a thing, each as one SQL predicate that serves checks and lists alike.
 * The predicates speak of fixed aliases that `scopes` brings in: c course, a assignment, ls lab section, t team, w work,
 * r report, d document, s snapshot, m marking, k remark, f file.
 */
export const scopes = {
	// Not a row: what belongs to no course. Its one id is 'site'.
	site: { from: sql.raw('(select 1) site'), id: sql.raw("'site'::text"), course: sql.raw('null::uuid') },
	course: { from: sql.raw('courses c'), id: sql.raw('c.id'), course: sql.raw('c.id') },
	assignment: { from: sql.raw('assignments a'), id: sql.raw('a.id'), course: sql.raw('a.course_id') },
	labSection: { from: sql.raw('lab_sections ls'), id: sql.raw('ls.id'), course: sql.raw('ls.course_id') },
	team: { from: sql.raw('teams t'), id: sql.raw('t.id'), course: sql.raw('t.course_id') },
	work: {
		from: sql.raw('work w join teams t on t.id = w.team_id'),
		id: sql.raw('w.id'),
		course: sql.raw('t.course_id')
	},
	report: {
		from: sql.raw('reports r join work w on w.id = r.work_id join teams t on t.id = w.team_id'),
		id: sql.raw('r.id'),
		course: sql.raw('t.course_id')
	},
	document: {
		from: sql.raw('documents d join work w on w.id = d.work_id join teams t on t.id = w.team_id'),
		id: sql.raw('d.id'),
		course: sql.raw('t.course_id')
	},
	snapshot: {
		from: sql.raw(
			'snapshots s join reports r on r.id = s.report_id join work w on w.id = r.work_id join teams t on t.id = w.team_id'
		),
		id: sql.raw('s.id'),
		course: sql.raw('t.course_id')
	},
	marking: {
		from: sql.raw(
			'markings m join snapshots s on s.id = m.snapshot_id join reports r on r.id = s.report_id join work w on w.id = r.work_id join teams t on t.id = w.team_id'
		),
		id: sql.raw('m.id'),
		course: sql.raw('t.course_id')
	},
	remark: {
		from: sql.raw(
			'remarks k join markings m on m.id = k.marking_id join snapshots s on s.id = m.snapshot_id join reports r on r.id = s.report_id join work w on w.id = r.work_id join teams t on t.id = w.team_id'
		),
		id: sql.raw('k.id'),
		course: sql.raw('t.course_id')
	},
	file: {
		from: sql.raw(
			"files f join work w on f.subject_kind = 'work' and w.id = f.subject_id join teams t on t.id = w.team_id"
		),
		id: sql.raw('f.id'),
		course: sql.raw('t.course_id')
	}
} satisfies Record<string, { from: SQL; id: SQL; course: SQL }>;

export type Thing = keyof typeof scopes;

type Predicate = (viewer: string) => SQL;

/** Named relations. Each may be used only on things whose scope brings in the aliases it speaks of. */
export const relations = {
	/** anyone with the role in the course */
	course: () => sql`true`,
	/** on the team now */
	team: (viewer) =>
		sql`exists (select 1 from team_members tm where tm.team_id = w.team_id and tm.user_id = ${viewer} and tm.during @> now())`,
	/** wrote the report */
	author: (viewer) => sql`r.author_id = ${viewer}`,
	/** owns the document: its author, or, where it has none, on the team */
	owner: (viewer) =>
		sql`(d.author_id = ${viewer} or (d.author_id is null and exists (select 1 from team_members tm where tm.team_id = w.team_id and tm.user_id = ${viewer} and tm.during @> now())))`,
	/** grades the lab section of the team */
	section: (viewer) =>
		sql`exists (select 1 from grading_sections gs where gs.lab_section_id = t.lab_section_id and gs.user_id = ${viewer})`,
	/** grades the lab section, and the report has been handed in: drafts are not the grader's */
	handedIn: (viewer) =>
		sql`(exists (select 1 from grading_sections gs where gs.lab_section_id = t.lab_section_id and gs.user_id = ${viewer}) and exists (select 1 from snapshots hs where hs.report_id = r.id))`,
	/** grades the lab section, and the document is the readings */
	readings: (viewer) =>
		sql`(d.kind = 'readings' and exists (select 1 from grading_sections gs where gs.lab_section_id = t.lab_section_id and gs.user_id = ${viewer}))`,
	/** made the marking */
	marker: (viewer) => sql`m.grader_id = ${viewer}`,
	/** wrote the report, and it has been returned */
	returned: (viewer) =>
		sql`(r.author_id = ${viewer} and (select rel.action from releases rel where rel.report_id = r.id order by rel.n desc limit 1) = 'return')`
} satisfies Record<string, Predicate>;

export type Relation = keyof typeof relations;
export type Role = 'student' | 'grader' | 'instructor' | 'administrator';

/** True where the person has the role in the thing's course (an administrator has it everywhere). */
export function hasRole(role: Role, viewer: string, course: SQL): SQL {
	if (role === 'administrator')
		return sql`exists (select 1 from users u where u.id = ${viewer} and u.site_administrator)`;
	return sql`exists (select 1 from members mb where mb.course_id = ${course} and mb.user_id = ${viewer} and mb.role = ${role} and mb.left_at is null)`;
}
