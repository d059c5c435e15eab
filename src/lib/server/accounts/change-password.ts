import { eq } from 'drizzle-orm';
import { z } from 'zod';
import { password } from '$lib/contracts/accounts';
import * as audit from '../audit';
import {
	endSessions,
	forgive,
	hashPassword,
	mustBeGoodPassword,
	passwordMatches,
	spend,
	type Act
} from '../auth';
import { database, schema, transact } from '../db';
import { unprocessable } from '../errors';
import { parse } from './parse';
import { lockPerson, personByEmail } from './people';

const input = z.object({ current: password, next: password });

/** Changes the password and ends every other session; `session` is the one that stays. */
export async function changePassword(act: Act, session: Uint8Array | null, given: unknown): Promise<void> {
	const { current, next } = parse(input, given);
	mustBeGoodPassword(next, act.viewer.email, 'next');
	await spend('password', act.viewer.id);
	const person = await personByEmail(database(), act.viewer.email);
	if (!(await passwordMatches(person?.passwordHash, current))) {
		const problem = 'This is not your present password. Type it again.';
		throw unprocessable(problem, { current: problem });
	}
	await forgive('password', act.viewer.id);
	const passwordHash = await hashPassword(next);
	await transact(undefined, async (tx) => {
		const locked = await lockPerson(tx, act.viewer.id);
		// Hashing takes time: a reset by mail in between wins.
		if (locked.passwordHash !== person?.passwordHash)
			throw unprocessable('The password was changed elsewhere meanwhile. Sign in again.');
		await tx.update(schema.users).set({ passwordHash }).where(eq(schema.users.id, locked.id));
		await endSessions(tx, locked.id, session);
		await audit.record(tx, {
			actorId: locked.id,
			action: 'account.changePassword',
			subjectKind: 'user',
			subjectId: locked.id
		});
	});
}
