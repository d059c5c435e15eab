import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { email } from '$lib/contracts/accounts';
import * as audit from '../audit';
import { spend } from '../auth';
import { database, transact } from '../db';
import * as mail from '../mail';
import { parse } from './parse';
import { personByEmail } from './people';
import { issueToken } from './tokens';
import type { Visitor } from './visitor';

const input = z.object({ email });

/**
 * Asks for a new password by mail. Whether the address is known is looked up by a job afterwards: the request itself does
 * the same for every address and takes the same time.
 */
export async function requestReset(visitor: Visitor, given: unknown): Promise<void> {
	const typed = parse(input, given);
	await spend('mail.address', visitor.address);
	await spend('mail.account', typed.email);
	await database().execute(
		sql`select graphile_worker.add_job('mailReset', json_build_object('email', ${typed.email}::text), max_attempts := 6)`
	);
}

/** The job: mails a link to a known address, nothing to another. */
export async function mailReset(address: string): Promise<void> {
	const person = await personByEmail(database(), address);
	if (!person) return;
	await transact(undefined, async (tx) => {
		const { token, subject } = await issueToken(tx, 'reset', { email: person.email, userId: person.id });
		await mail.enqueue(tx, {
			kind: 'reset',
			subject,
			recipient: person.email,
			payload: { token, name: person.name }
		});
		await audit.record(tx, {
			actorId: null,
			action: 'account.requestReset',
			subjectKind: 'user',
			subjectId: person.id
		});
	});
}
