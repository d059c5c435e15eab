import { eq, sql } from 'drizzle-orm';
import { digestOf, newSecret } from '../auth';
import { database, schema, type Database, type Transaction } from '../db';
import { conflict, notFound, tooLate } from '../errors';

const { accountTokens } = schema;

/** How long a mailed link works, hours. */
const lifetimes = { invitation: 14 * 24, verification: 24, reset: 1 } as const;
export type TokenKind = keyof typeof lifetimes;
type TokenRow = typeof accountTokens.$inferSelect;

export interface Issued {
	/** stands in the link and nowhere else */
	token: string;
	/** names the token in the outbox and the record */
	subject: string;
	expiresAt: Date;
}

/** Makes a link's secret; the row keeps only its SHA-256. */
export async function issueToken(
	tx: Transaction,
	kind: TokenKind,
	given: { email: string; userId?: string; grants?: unknown }
): Promise<Issued> {
	const token = newSecret();
	const tokenSha256 = digestOf(token);
	const [row] = await tx
		.insert(accountTokens)
		.values({
			...given,
			tokenSha256,
			kind,
			expiresAt: sql`now() + make_interval(hours => ${lifetimes[kind]}::int)`
		})
		.returning({ expiresAt: accountTokens.expiresAt });
	if (!row) throw new Error('the token was not stored');
	return { token, subject: Buffer.from(tokenSha256).toString('hex'), expiresAt: row.expiresAt };
}

/** What a link is good for, for the page that shows it. */
export type TokenState = 'open' | 'used' | 'expired';

export function stateOf(row: TokenRow, now: Date): TokenState {
	if (row.usedAt) return 'used';
	return row.expiresAt <= now ? 'expired' : 'open';
}

/** The row behind a link, with what it is good for; throws Refusal 'not-found' for a link that never was. */
export async function findToken(
	kind: TokenKind,
	token: string,
	db: Database | Transaction = database()
): Promise<{ row: TokenRow; state: TokenState }> {
	const [row] = await db
		.select()
		.from(accountTokens)
		.where(eq(accountTokens.tokenSha256, digestOf(token)));
	if (!row || row.kind !== kind) throw notFound();
	return { row, state: stateOf(row, new Date()) };
}

/** Locks an open token; throws Refusal 'conflict' when it was used, 'too-late' when its time is over. */
export async function lockToken(tx: Transaction, kind: TokenKind, token: string): Promise<TokenRow> {
	const [row] = await tx
		.select()
		.from(accountTokens)
		.where(eq(accountTokens.tokenSha256, digestOf(token)))
		.for('update');
	if (!row || row.kind !== kind) throw notFound();
	const state = stateOf(row, new Date());
	if (state === 'used') throw conflict('This link was used already. Sign in instead.');
	if (state === 'expired') throw tooLate('This link is over. Ask for a new one.');
	return row;
}

/** A used link opens nothing again. What it carried is emptied: it may hold the hash of a password. */
export async function useToken(tx: Transaction, row: TokenRow): Promise<void> {
	const grants = row.grants as { passwordHash?: string } | null;
	await tx
		.update(accountTokens)
		.set({ usedAt: sql`now()`, grants: grants?.passwordHash ? null : grants })
		.where(eq(accountTokens.tokenSha256, row.tokenSha256));
}
