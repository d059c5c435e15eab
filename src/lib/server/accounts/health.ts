import { sql } from 'drizzle-orm';
import { database } from '../db';

/** Whether this process reaches its database, and in how many milliseconds. Throws when it does not. */
export async function health(): Promise<{ state: 'well'; databaseMs: number }> {
	const begun = performance.now();
	await database().execute(sql`select 1`);
	return { state: 'well', databaseMs: Math.round((performance.now() - begun) * 100) / 100 };
}
