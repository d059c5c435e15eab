import { v7 as uuidv7 } from 'uuid';
import { z } from 'zod';
import { email, initials, password, personName } from '$lib/contracts/accounts';
import * as audit from '../audit';
import { hashPassword, mustBeGoodPassword, spend } from '../auth';
import { transact } from '../db';
import * as mail from '../mail';
import { initialsOf } from './initials';
import { courseLabel, type Grant } from './membership';
import { parse } from './parse';
import { personByEmail } from './people';
import { issueToken } from './tokens';
import type { Visitor } from './visitor';
import { sectionOfGuessedWords, spelledWords } from './words';

const input = z.object({
	words: z.string().max(200),
	name: personName,
	initials: initials.or(z.literal('')).default(''),
	email,
	password
});

/** What a verification's row carries until the address is confirmed; nobody has an account before that. */
export interface JoinGrant extends Grant {
	name: string;
	initials: string;
	passwordHash: string;
}

/** What a page may say of words. */
export async function sectionAhead(visitor: Visitor, words: string) {
	const { course, section } = await sectionOfGuessedWords(visitor.address, words);
	return {
		words: spelledWords(words),
		course: courseLabel(course),
		institution: course.institution,
		labSection: section.name,
		meets: section.meets
	};
}

/**
 * Somebody new joins with bench words: a letter goes to the address, and the account begins when its link is opened.
 * An address that has an account gets the same answer here and another letter.
 */
export async function requestJoin(visitor: Visitor, given: unknown): Promise<void> {
	const typed = parse(input, given);
	mustBeGoodPassword(typed.password, typed.email);
	const found = await sectionOfGuessedWords(visitor.address, typed.words);
	await spend('mail.address', visitor.address);
	await spend('mail.account', typed.email);
	const passwordHash = await hashPassword(typed.password);
	await transact(undefined, async (tx) => {
		const known = await personByEmail(tx, typed.email);
		const course = courseLabel(found.course);
		if (known?.passwordHash) {
			await mail.enqueue(tx, {
				kind: 'already-known',
				subject: uuidv7(),
				recipient: typed.email,
				payload: { course, labSection: found.section.name, words: found.words }
			});
			return;
		}
		const grants: JoinGrant = {
			courseId: found.course.id,
			role: 'student',
			labSectionId: found.section.id,
			name: typed.name,
			initials: typed.initials || initialsOf(typed.name),
			passwordHash
		};
		const { token, subject } = await issueToken(tx, 'verification', { email: typed.email, grants });
		await mail.enqueue(tx, {
			kind: 'verification',
			subject,
			recipient: typed.email,
			payload: { token, name: typed.name, course, labSection: found.section.name }
		});
		await audit.record(tx, {
			actorId: null,
			courseId: found.course.id,
			action: 'course.requestJoin',
			subjectKind: 'labSection',
			subjectId: found.section.id,
			detail: { email: typed.email }
		});
	});
}
