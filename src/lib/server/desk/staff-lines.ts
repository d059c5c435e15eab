import { sql } from 'drizzle-orm';
import { allowed, type Viewer } from '../auth';
import { database } from '../db';

/** What waits for a grader or an instructor on one assignment. */
export interface StaffLine {
	course: { slug: string; code: string; zone: string };
	assignmentId: string;
	title: string;
	dueLocal: string;
	/** handed in, in the sections the viewer grades, and without a finished marking */
	toMark: number;
	/** marked in full and not returned yet (for instructors) */
	toReturn: number;
	handedIn: number;
	returned: number;
}

/** Assignments of the courses where the viewer grades or instructs. */
export async function staffLines(viewer: Viewer, role: 'grader' | 'instructor'): Promise<StaffLine[]> {
	const rows = await database().execute<{
		slug: string;
		code: string;
		zone: string;
		assignment_id: string;
		title: string;
		due_local: string;
		to_mark: number;
		to_return: number;
		handed_in: number;
		returned: number;
	}>(sql`
		with handed as (
			select rep.id, wk.assignment_id, tea.lab_section_id,
				exists (select 1 from markings mk where mk.snapshot_id = rep.counted_snapshot_id and mk.kind = 'first' and mk.finished_at is not null) as marked,
				coalesce((select rl.action from releases rl where rl.report_id = rep.id order by rl.n desc limit 1), '') = 'return' as returned,
				exists (select 1 from grading_sections gr where gr.lab_section_id = tea.lab_section_id and gr.user_id = ${viewer.id}) as mine
			from reports rep join work wk on wk.id = rep.work_id join teams tea on tea.id = wk.team_id
			where rep.counted_snapshot_id is not null
		)
		select c.slug, c.code, c.zone, asg.id as assignment_id, asg.title, asg.due_local::text as due_local,
			count(h.id) filter (where h.mine and not h.marked)::int as to_mark,
			count(h.id) filter (where h.marked and not h.returned)::int as to_return,
			count(h.id)::int as handed_in,
			count(h.id) filter (where h.returned)::int as returned
		from members mem join courses c on c.id = mem.course_id join assignments asg on asg.course_id = c.id
		left join handed h on h.assignment_id = asg.id
		where mem.user_id = ${viewer.id} and mem.role = ${role} and mem.left_at is null
			and ${allowed('assignment.see', viewer.id, sql`asg.id`)}
		group by c.id, asg.id order by asg.due_local`);
	return rows.map((row) => ({
		course: { slug: row.slug, code: row.code, zone: row.zone },
		assignmentId: row.assignment_id,
		title: row.title,
		dueLocal: row.due_local,
		toMark: row.to_mark,
		toReturn: row.to_return,
		handedIn: row.handed_in,
		returned: row.returned
	}));
}
