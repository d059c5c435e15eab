import { and, isNotNull, lt, or, sql } from 'drizzle-orm';
import { dropExpiredLimits } from '../auth';
import { database, schema } from '../db';

const { accountTokens, idempotency, sessions } = schema;

/** Removes what is over: sessions, counters, links a month old, answers kept for repeats. */
export async function tidy(): Promise<void> {
	const db = database();
	await db.delete(sessions).where(lt(sessions.expiresAt, sql`now()`));
	await dropExpiredLimits();
	await db.delete(idempotency).where(lt(idempotency.createdAt, sql`now() - interval '30 days'`));
	// A confirmation that never came holds the hash of a password: it goes as soon as it is over.
	await db
		.delete(accountTokens)
		.where(
			or(
				lt(accountTokens.expiresAt, sql`now() - interval '30 days'`),
				and(
					isNotNull(accountTokens.grants),
					sql`${accountTokens.kind} = 'verification'`,
					lt(accountTokens.expiresAt, sql`now() - interval '1 day'`)
				)
			)
		);
}
