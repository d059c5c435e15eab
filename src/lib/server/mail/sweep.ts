import { sql } from 'drizzle-orm';
import { database } from '../db';
import { addDelivery } from './enqueue';

/**
 * Queues what is unsent and has no delivery waiting: a queue that was emptied, or a mail server away for longer than the
 * tries lasted. Returns how many.
 */
export async function sweep(): Promise<number> {
	const db = database();
	const left = await db.execute<{ id: string }>(sql`
		select o.id from outbox o
		where o.sent_at is null and o.created_at between now() - interval '7 days' and now() - interval '1 minute'
			and not exists (select 1 from graphile_worker.jobs j where j.key = 'deliver:' || o.id and j.attempts < j.max_attempts)
		order by o.created_at limit 200`);
	for (const { id } of left) await addDelivery(db, id);
	return left.length;
}
