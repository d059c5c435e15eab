import { eq, sql } from 'drizzle-orm';
import type { Cookie } from 'lucia';
import { z } from 'zod';
import { initials, password, personName } from '$lib/contracts/accounts';
import * as audit from '../audit';
import { hashPassword, mustBeGoodPassword, openSession, type Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, forbidden } from '../errors';
import { initialsOf } from './initials';
import type { InvitationGrant } from './invite';
import { addMember } from './membership';
import { parse } from './parse';
import { makeAccount } from './people';
import { findToken, lockToken, useToken } from './tokens';
import type { Visitor } from './visitor';

const input = z.object({ name: personName, initials: initials.or(z.literal('')).default(''), password });

/** Makes the account of somebody new, makes them a member, and opens a session. The link proves the address. */
export async function acceptInvitation(visitor: Visitor, token: string, given: unknown): Promise<Cookie> {
	const typed = parse(input, given);
	const { row: seen } = await findToken('invitation', token);
	mustBeGoodPassword(typed.password, seen.email);
	const passwordHash = await hashPassword(typed.password);
	return transact(undefined, async (tx) => {
		const row = await lockToken(tx, 'invitation', token);
		const person = await makeAccount(tx, {
			email: row.email,
			name: typed.name,
			initials: typed.initials || initialsOf(typed.name),
			passwordHash
		});
		if (!person) throw conflict('This address has an account already. Sign in, then open the link again.');
		await useToken(tx, row);
		await audit.record(tx, {
			actorId: person.id,
			action: 'account.make',
			subjectKind: 'user',
			subjectId: person.id,
			detail: { by: 'invitation' }
		});
		await addMember(tx, person, row.grants as InvitationGrant);
		return openSession(tx, person.id, visitor.client);
	});
}

/** Makes somebody signed in a member, when the invitation went to their address. */
export async function acceptInvitationAs(act: Act, token: string): Promise<void> {
	await transact(act.repeatable, async (tx) => {
		const row = await lockToken(tx, 'invitation', token);
		if (row.email !== act.viewer.email) {
			throw forbidden(`This invitation is for ${row.email}. Sign out, then open the link again.`);
		}
		await tx
			.update(schema.users)
			.set({ emailVerifiedAt: sql`coalesce(${schema.users.emailVerifiedAt}, now())` })
			.where(eq(schema.users.id, act.viewer.id));
		await useToken(tx, row);
		await addMember(tx, act.viewer, row.grants as InvitationGrant);
	});
}
