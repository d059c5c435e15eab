import { sql } from 'drizzle-orm';
import * as courses from '../courses';
import { allowed, type Viewer } from '../auth';
import { database } from '../db';

/** One assignment of a student's, as the desk tells of it. */
export interface StudentLine {
	course: { slug: string; code: string; zone: string };
	assignmentId: string;
	title: string;
	team: string | null;
	workId: string | null;
	dueAt: Date;
	closesAt: Date;
	/** with whom it lies */
	custody: 'team' | 'marker' | 'returned' | 'closed';
	handedInAt: Date | null;
	returnedAt: Date | null;
}

/** Every assignment in the courses where the viewer is a student, soonest due first. */
export async function studentLines(viewer: Viewer, now: Date): Promise<StudentLine[]> {
	const db = database();
	const rows = await db.execute<{
		slug: string;
		code: string;
		zone: string;
		assignment_id: string;
		title: string;
		team: string | null;
		work_id: string | null;
		handed_in_at: string | null;
		release: string | null;
		released_at: string | null;
	}>(sql`
		select c.slug, c.code, c.zone, asg.id as assignment_id, asg.title, own.team, own.work_id,
			snap.received_at as handed_in_at, rel.action as release, rel.created_at as released_at
		from members mem
		join courses c on c.id = mem.course_id
		join assignments asg on asg.course_id = c.id
		left join lateral (
			select wk.id as work_id, tm2.name as team from team_members tmb
			join teams tm2 on tm2.id = tmb.team_id left join work wk on wk.team_id = tm2.id and wk.assignment_id = asg.id
			where tmb.course_id = c.id and tmb.user_id = ${viewer.id} and tmb.during @> now() limit 1
		) own on true
		left join reports rep on rep.work_id = own.work_id and rep.author_id = ${viewer.id}
		left join snapshots snap on snap.id = rep.counted_snapshot_id
		left join lateral (select action, created_at from releases where report_id = rep.id order by n desc limit 1) rel on true
		where mem.user_id = ${viewer.id} and mem.role = 'student' and mem.left_at is null
			and ${allowed('assignment.see', viewer.id, sql`asg.id`)}
		order by asg.due_local`);
	const lines: StudentLine[] = [];
	for (const row of rows) {
		const due = await courses.dueFor(db, row.assignment_id, viewer.id);
		const handedInAt = row.handed_in_at ? new Date(row.handed_in_at) : null;
		const returned = row.release === 'return';
		const custody = returned ? 'returned' : handedInAt ? 'marker' : due.closesAt < now ? 'closed' : 'team';
		lines.push({
			course: { slug: row.slug, code: row.code, zone: row.zone },
			assignmentId: row.assignment_id,
			title: row.title,
			team: row.team,
			workId: row.work_id,
			dueAt: due.dueAt,
			closesAt: due.closesAt,
			custody,
			handedInAt,
			returnedAt: returned && row.released_at ? new Date(row.released_at) : null
		});
	}
	return lines.sort((a, b) => a.dueAt.getTime() - b.dueAt.getTime());
}
