import type { Cookie } from 'lucia';
import { z } from 'zod';
import { password } from '$lib/contracts/accounts';
import * as audit from '../audit';
import { openSession, passwordMatches, spend } from '../auth';
import { database, transact } from '../db';
import { conflict, tooLate, unprocessable } from '../errors';
import { addMember, courseLabel, courseOf, labSectionOf } from './membership';
import { parse } from './parse';
import { makeAccount } from './people';
import type { JoinGrant } from './request-join';
import { findToken, lockToken, useToken, type TokenState } from './tokens';
import type { Visitor } from './visitor';

const input = z.object({ password });

export interface Verification {
	state: TokenState;
	email: string;
	/** empty once the link was used */
	course: string;
	labSection: string;
}

/** What the page of a confirmation link shows. */
export async function verificationOf(token: string): Promise<Verification> {
	const { row, state } = await findToken('verification', token);
	const grant = row.grants as JoinGrant | null;
	if (!grant?.labSectionId) return { state, email: row.email, course: '', labSection: '' };
	const course = await courseOf(database(), grant.courseId);
	const section = await labSectionOf(database(), course.id, grant.labSectionId);
	return { state, email: row.email, course: courseLabel(course), labSection: section.name };
}

/**
 * Confirms an address and begins the account. Asks for the password chosen at joining: whoever merely receives a letter
 * that somebody else asked for cannot be led into an account whose password that other knows.
 */
export async function verifyEmail(visitor: Visitor, token: string, given: unknown): Promise<Cookie> {
	const typed = parse(input, given);
	const { row: seen, state } = await findToken('verification', token);
	if (state === 'used') throw conflict('This link was used already. Sign in instead.');
	if (state === 'expired') throw tooLate('This link is over. Join with the words again.');
	await spend('password', token);
	const promised = seen.grants as JoinGrant;
	if (!(await passwordMatches(promised.passwordHash, typed.password))) {
		const problem =
			'This is not the password chosen at joining. Type it again, or join with the words again.';
		throw unprocessable(problem, { password: problem });
	}
	return transact(undefined, async (tx) => {
		const row = await lockToken(tx, 'verification', token);
		const grant = row.grants as JoinGrant;
		const { name, initials, passwordHash } = grant;
		const person = await makeAccount(tx, { email: row.email, name, initials, passwordHash });
		if (!person) throw conflict('This address has an account by now. Sign in, then join with the words.');
		await useToken(tx, row);
		await audit.record(tx, {
			actorId: person.id,
			action: 'account.make',
			subjectKind: 'user',
			subjectId: person.id,
			detail: { by: 'words' }
		});
		await addMember(tx, person, grant);
		return openSession(tx, person.id, visitor.client);
	});
}
