import { sql } from 'drizzle-orm';
import { database } from '../db';
import { blobKey, incomingKey, remove } from './object-store';

/**
 * For the job queue: removes what interrupted uploads left, marks bytes that no file names any more, and deletes them after
 * 30 days under a lock of their row, so that an upload of the same bytes at that moment waits and then brings them again.
 */
export async function tidy(): Promise<void> {
	const db = database();
	const expired = await db.execute<{ id: string }>(
		sql`select id from uploads where expires_at < now() order by expires_at limit 200`
	);
	for (const { id } of expired) {
		await remove(incomingKey(id));
		await db.execute(sql`delete from uploads where id = ${id}`);
	}
	await db.execute(sql`
		update blobs set unreferenced_since = now()
		where unreferenced_since is null and not exists (select 1 from files where files.sha256 = blobs.sha256)
			and created_at < now() - interval '1 day'`);
	const old = await db.execute<{ sha256: Uint8Array }>(
		sql`select sha256 from blobs where unreferenced_since < now() - interval '30 days' limit 200`
	);
	for (const { sha256 } of old) {
		await db.transaction(async (tx) => {
			const rows = await tx.execute(sql`
				delete from blobs where sha256 = ${sha256}::bytea and unreferenced_since < now() - interval '30 days'
					and not exists (select 1 from files where files.sha256 = blobs.sha256) returning sha256`);
			if (rows.length > 0) await remove(blobKey(sha256));
		});
	}
}
