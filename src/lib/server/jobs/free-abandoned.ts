import { sql } from 'drizzle-orm';
import type { Database } from '../db';

/** No task of ours takes nearly as long. */
const longestTask = '5 minutes';

/**
 * Gives back to the queue what a runner had taken and never finished, because its process was killed or its connection was
 * lost. The queue itself waits four hours for that; a receipt should not. A task can so be done twice: all of ours allow it.
 * @param after age of the lock, as an interval of PostgreSQL
 */
export async function freeAbandoned(db: Pick<Database, 'execute'>, after = longestTask): Promise<void> {
	await db.execute(sql`
		select graphile_worker.force_unlock_workers(array_agg(distinct locked_by))
		from graphile_worker.jobs where locked_at < now() - ${after}::interval having count(*) > 0`);
}
