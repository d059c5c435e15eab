import { and, eq, isNull, sql } from 'drizzle-orm';
import type { Cookie } from 'lucia';
import { z } from 'zod';
import { password } from '$lib/contracts/accounts';
import * as audit from '../audit';
import { endSessions, forgive, hashPassword, mustBeGoodPassword, openSession } from '../auth';
import { schema, transact } from '../db';
import { parse } from './parse';
import { findToken, lockToken, useToken, type TokenState } from './tokens';
import type { Visitor } from './visitor';

const { accountTokens, users } = schema;
const input = z.object({ password });

/** What a reset link is good for. */
export async function resetOf(token: string): Promise<{ state: TokenState; email: string }> {
	const { row, state } = await findToken('reset', token);
	return { state, email: row.email };
}

/** Sets a new password by a mailed link, ends every session, and opens one here. The link proves the address too. */
export async function reset(visitor: Visitor, token: string, given: unknown): Promise<Cookie> {
	const typed = parse(input, given);
	const { row: seen } = await findToken('reset', token);
	mustBeGoodPassword(typed.password, seen.email);
	const passwordHash = await hashPassword(typed.password);
	const cookie = await transact(undefined, async (tx) => {
		const row = await lockToken(tx, 'reset', token);
		const userId = row.userId;
		if (!userId) throw new Error('a reset link without a person');
		await tx
			.update(users)
			.set({ passwordHash, emailVerifiedAt: sql`coalesce(${users.emailVerifiedAt}, now())` })
			.where(eq(users.id, userId));
		await useToken(tx, row);
		// Earlier letters are worth nothing once one was used.
		await tx
			.update(accountTokens)
			.set({ usedAt: sql`now()` })
			.where(
				and(eq(accountTokens.userId, userId), eq(accountTokens.kind, 'reset'), isNull(accountTokens.usedAt))
			);
		await endSessions(tx, userId);
		await audit.record(tx, {
			actorId: userId,
			action: 'account.reset',
			subjectKind: 'user',
			subjectId: userId
		});
		return openSession(tx, userId, visitor.client);
	});
	await forgive('sign-in.account', seen.email);
	return cookie;
}
