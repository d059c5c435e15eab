import { sql } from 'drizzle-orm';
import { allowed, type Viewer } from '../auth';
import type { Database, Transaction } from '../db';

/**
 * Whether this grader may not read authors' names on an assignment: where they are hidden, until every report that this
 * grader may mark is returned. Names of some would name the rest: who is left on the list wrote what is left.
 */
export async function namesHidden(
	db: Database | Transaction,
	viewer: Viewer,
	assignment: { id: string; hideNames: boolean }
): Promise<boolean> {
	if (!assignment.hideNames) return false;
	const [row] = await db.execute<{ hidden: boolean }>(
		sql`select exists (
				select 1 from reports rep join work wk on wk.id = rep.work_id
				where wk.assignment_id = ${assignment.id} and rep.counted_snapshot_id is not null
				and ${allowed('report.mark', viewer.id, sql`rep.id`)}
				and (select rel.action from releases rel where rel.report_id = rep.id order by rel.n desc limit 1)
					is distinct from 'return'
			) as hidden`
	);
	return row?.hidden ?? true;
}
