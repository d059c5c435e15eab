import { eq } from 'drizzle-orm';
import { schema, type Database, type Transaction } from '../db';
import { notFound } from '../errors';

const { work } = schema;

/** A work's own row; whether anybody may see it is asked before. */
export async function workRow(
	db: Database | Transaction,
	workId: string
): Promise<{ id: string; assignmentId: string; teamId: string }> {
	const [row] = await db.select().from(work).where(eq(work.id, workId));
	if (!row) throw notFound();
	return { id: row.id, assignmentId: row.assignmentId, teamId: row.teamId };
}
