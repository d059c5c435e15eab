import type { Cookie } from 'lucia';
import { z } from 'zod';
import { email } from '$lib/contracts/accounts';
import * as audit from '../audit';
import { forgive, giveBack, openSession, passwordMatches, spend } from '../auth';
import { database, transact } from '../db';
import { forbidden, unprocessable } from '../errors';
import { parse } from './parse';
import { personByEmail } from './people';
import type { Visitor } from './visitor';

const input = z.object({ email: z.string().max(1000), password: z.string().max(2000) });

/**
 * Opens a session. A wrong password and an unknown address get the same answer after the same work, and count alike
 * against the limits of the account named and of the address it came from.
 */
export async function signIn(visitor: Visitor, given: unknown): Promise<Cookie> {
	const typed = parse(input, given);
	const address = email.safeParse(typed.email).data ?? typed.email.trim().toLowerCase();
	await spend('sign-in.address', visitor.address);
	await spend('sign-in.account', address);
	const person = await personByEmail(database(), address);
	if (!(await passwordMatches(person?.passwordHash, typed.password)) || !person) {
		throw unprocessable('E-mail or password does not match.');
	}
	await forgive('sign-in.account', address);
	await giveBack('sign-in.address', visitor.address);
	if (!person.emailVerifiedAt) {
		throw forbidden('This address is not confirmed yet. Choose a new password by mail: that confirms it.');
	}
	return transact(undefined, async (tx) => {
		const cookie = await openSession(tx, person.id, visitor.client);
		await audit.record(tx, {
			actorId: person.id,
			action: 'account.signIn',
			subjectKind: 'user',
			subjectId: person.id
		});
		return cookie;
	});
}
