import { sql } from 'drizzle-orm';
import type { Database, Transaction } from '../db';

/**
 * Writes down when each document takes no more edits: an author's own at that student's closing, extensions included; a
 * team's at the latest of its members'. Set ahead of time, so that the append itself refuses at that very moment; repeated
 * by the clock, so that moved dates and granted extensions count within a minute, also to open again what was closed.
 * Local times are ruled in the course's zone, by the database's own zone rules. Returns how many changed.
 */
export async function setFreezing(db: Database | Transaction, workId?: string): Promise<number> {
	const changed = await db.execute(sql`
		with closing as (
			select d.id, greatest(a.closes_local, (
				select max(e.closes_local) from extensions e
				where e.assignment_id = a.id and (
					e.team_id = w.team_id
					or e.user_id = d.author_id
					or d.author_id is null and e.user_id in (
						select tm.user_id from team_members tm where tm.team_id = w.team_id and tm.during @> now()
					)
				)
			)) at time zone c.zone as at
			from documents d
			join work w on w.id = d.work_id
			join assignments a on a.id = w.assignment_id
			join courses c on c.id = a.course_id
			where ${workId === undefined ? sql`true` : sql`w.id = ${workId}`}
		)
		update documents set frozen_at = closing.at from closing
		where documents.id = closing.id and documents.frozen_at is distinct from closing.at
		returning documents.id`);
	return changed.length;
}
