import { sql } from 'drizzle-orm';
import * as courses from '../courses';
import type { Database, Transaction } from '../db';
import type { ReportRow } from './report-row';

export interface ClosingTimes {
	/** of the author's own sections */
	author: Date;
	/** of what the team shares: the latest of its members */
	team: Date;
}

/** When the documents of a report's work close, extensions included. */
export async function closingTimes(
	db: Database | Transaction,
	report: Pick<ReportRow, 'workId' | 'assignmentId'>,
	due: courses.Due
): Promise<ClosingTimes> {
	const [row] = await db.execute<{ local: string | null }>(sql`
		select greatest(max(a.closes_local), max(e.closes_local))::text as local
		from work w join assignments a on a.id = w.assignment_id
		left join extensions e on e.assignment_id = a.id and (
			e.team_id = w.team_id or e.user_id in (
				select tm.user_id from team_members tm where tm.team_id = w.team_id and tm.during @> now()
				union select r.author_id from reports r where r.work_id = w.id
			)
		)
		where w.id = ${report.workId}`);
	const team = row?.local ? courses.instantOf(row.local, due.zone) : due.closesAt;
	return { author: due.closesAt, team: team > due.closesAt ? team : due.closesAt };
}

/** Step: notes in the documents when they close, where that is not what stands there. Dates and extensions move it both ways. */
export async function settleFreezing(
	db: Database | Transaction,
	report: Pick<ReportRow, 'workId' | 'authorId'>,
	{ author, team }: ClosingTimes
): Promise<void> {
	await db.execute(sql`
		update documents set frozen_at = ${team.toISOString()}::timestamptz
		where work_id = ${report.workId} and author_id is null and kind in ('section', 'readings', 'workings')
			and frozen_at is distinct from ${team.toISOString()}::timestamptz`);
	await db.execute(sql`
		update documents set frozen_at = ${author.toISOString()}::timestamptz
		where work_id = ${report.workId} and author_id = ${report.authorId} and kind = 'section'
			and frozen_at is distinct from ${author.toISOString()}::timestamptz`);
}
