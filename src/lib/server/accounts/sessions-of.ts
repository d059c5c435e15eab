import { and, desc, eq, sql } from 'drizzle-orm';
import type { Viewer } from '../auth';
import { database, schema } from '../db';

const { sessions } = schema;

/** Where a person is signed in, newest first. `session` is the one that asks. */
export async function sessionsOf(viewer: Viewer, session: Uint8Array | null) {
	const rows = await database()
		.select()
		.from(sessions)
		.where(and(eq(sessions.userId, viewer.id), sql`${sessions.expiresAt} > now()`))
		.orderBy(desc(sessions.createdAt));
	const current = session ? Buffer.from(session).toString('hex') : '';
	return rows.map((row) => {
		const id = Buffer.from(row.tokenSha256).toString('hex');
		return {
			id,
			client: row.client,
			startedAt: row.createdAt.toISOString(),
			expiresAt: row.expiresAt.toISOString(),
			current: id === current
		};
	});
}
