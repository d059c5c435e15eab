import { eq } from 'drizzle-orm';
import type { Jobs } from '../../src/lib/server/jobs';
import { afterAll, beforeAll, expect, test } from 'vitest';
import * as accounts from '../../src/lib/server/accounts';
import { hashPassword, readSession, sessionHolds } from '../../src/lib/server/auth';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import { startJobs } from '../../src/lib/server/process';
import { until } from '../account-requests';
import { act, makeCourse, makePerson, type MadeCourse } from '../factories';
import { caughtMail, freshDatabase, type FreshDatabase } from '../harness';

let fresh: FreshDatabase;
let runner: Jobs;
let course: MadeCourse;
const password = 'copper rowan tide ladder';
const from = (address: string) => ({ address, client: 'a browser' });
const header = (cookie: { name: string; value: string }) => `${cookie.name}=${cookie.value}`;
let counter = 0;
const newAddress = () => `new.person.${Date.now().toString(36)}.${counter++}@harrow-point.example`;

/** The token at the end of the link that a letter of this subject holds. */
async function tokenMailedTo(address: string, page: string): Promise<string> {
	return until(async () => {
		const mails = await caughtMail(address);
		return mails
			.flatMap((mail) => mail.links)
			.map((link) => new URL(link))
			.filter((link) => link.origin === process.env['ORIGIN'] && link.pathname.startsWith(`/${page}/`))
			.at(-1)
			?.pathname.split('/')[2];
	});
}

const membershipOf = async (email: string) =>
	database()
		.select({ role: schema.members.role, labSectionId: schema.members.labSectionId })
		.from(schema.members)
		.innerJoin(schema.users, eq(schema.users.id, schema.members.userId))
		.where(eq(schema.users.email, email));

beforeAll(async () => {
	fresh = await freshDatabase();
	course = await makeCourse();
	runner = await startJobs();
});
afterAll(async () => {
	await runner.stop();
	await closeDatabase();
	await fresh.drop();
});

test('from invitation mail to member: the link makes the account and works once', async () => {
	const email = newAddress();
	const given = {
		course: course.id,
		email,
		role: 'student',
		labSectionId: course.labSectionId,
		name: 'Bo Achterberg'
	} as const;
	const answer = await accounts.invite(act(course.instructor), given);
	expect(answer).toMatchObject({ email, role: 'student' });
	const token = await tokenMailedTo(email, 'invitation');
	expect(await accounts.invitationOf(token)).toMatchObject({
		state: 'open',
		email,
		role: 'student',
		name: 'Bo Achterberg',
		known: false
	});
	await expect(
		accounts.acceptInvitation(from('10.0.0.1'), token, { name: 'Bo Achterberg', password: 'short' })
	).rejects.toMatchObject({ detail: { fields: { password: '5 characters. Use at least 12.' } } });
	const cookie = await accounts.acceptInvitation(from('10.0.0.1'), token, {
		name: 'Bo Achterberg',
		initials: '',
		password
	});
	expect((await readSession(header(cookie)))?.viewer).toMatchObject({
		email,
		name: 'Bo Achterberg',
		initials: 'B.A.'
	});
	expect(await membershipOf(email)).toEqual([{ role: 'student', labSectionId: course.labSectionId }]);
	expect(await accounts.invitationOf(token)).toMatchObject({ state: 'used' });
	await expect(
		accounts.acceptInvitation(from('10.0.0.1'), token, { name: 'Bo', password })
	).rejects.toMatchObject({ kind: 'conflict' });
	await accounts.signIn(from('10.0.0.1'), { email, password });
	await until(async () => (await caughtMail(email)).some((mail) => mail.subject.startsWith('You are in ')));
	const [row] = await database()
		.select({ payload: schema.outbox.payload, sentAt: schema.outbox.sentAt })
		.from(schema.outbox)
		.where(eq(schema.outbox.recipient, email));
	expect(JSON.stringify(row?.payload)).not.toContain(token);
	await expect(accounts.invite(act(course.instructor), given)).rejects.toMatchObject({ kind: 'conflict' });
});

test('two who open one invitation at once make one account', async () => {
	const email = newAddress();
	await accounts.invite(act(course.instructor), { course: course.id, email, role: 'student' });
	const token = await tokenMailedTo(email, 'invitation');
	const both = await Promise.allSettled(
		['One Person', 'Two Person'].map((name) =>
			accounts.acceptInvitation(from('10.0.0.2'), token, { name, password })
		)
	);
	expect(both.map((one) => one.status).sort()).toEqual(['fulfilled', 'rejected']);
	expect(await membershipOf(email)).toHaveLength(1);
});

test('only instructors invite; a stranger learns nothing of the course', async () => {
	const given = { course: course.id, email: newAddress(), role: 'instructor' } as const;
	await expect(accounts.invite(act(course.student), given)).rejects.toMatchObject({ kind: 'forbidden' });
	await expect(accounts.invite(act(course.grader), given)).rejects.toMatchObject({ kind: 'forbidden' });
	await expect(accounts.invite(act(course.stranger), given)).rejects.toMatchObject({ kind: 'not-found' });
});

test('an invitation replaces an earlier open one; a grader’s gives the lab section to mark', async () => {
	const email = newAddress();
	const given = { course: course.id, email, role: 'grader', labSectionId: course.otherLabSectionId } as const;
	await accounts.invite(act(course.instructor), given);
	const first = await tokenMailedTo(email, 'invitation');
	await accounts.invite(act(course.instructor), given);
	const second = await until(async () => {
		const token = await tokenMailedTo(email, 'invitation');
		return token !== first && token;
	});
	expect(await accounts.invitationOf(first)).toMatchObject({ state: 'expired' });
	await expect(
		accounts.acceptInvitation(from('10.0.0.3'), first, { name: 'Cyr Day', password })
	).rejects.toMatchObject({ kind: 'too-late' });
	await accounts.acceptInvitation(from('10.0.0.3'), second, { name: 'Cyr Day', password });
	const sections = await database()
		.select({ id: schema.gradingSections.labSectionId })
		.from(schema.gradingSections)
		.innerJoin(schema.users, eq(schema.users.id, schema.gradingSections.userId))
		.where(eq(schema.users.email, email));
	expect(sections).toEqual([{ id: course.otherLabSectionId }]);
});

test('an invitation to somebody with an account is accepted signed in, by nobody else', async () => {
	const ada = await makePerson();
	await database()
		.update(schema.users)
		.set({ passwordHash: await hashPassword(password) })
		.where(eq(schema.users.id, ada.id));
	await accounts.invite(act(course.instructor), { course: course.id, email: ada.email, role: 'student' });
	const token = await tokenMailedTo(ada.email, 'invitation');
	expect(await accounts.invitationOf(token)).toMatchObject({ known: true });
	await expect(
		accounts.acceptInvitation(from('10.0.0.4'), token, { name: 'Not Ada', password: 'another good password' })
	).rejects.toMatchObject({ kind: 'conflict' });
	await expect(accounts.acceptInvitationAs(act(course.stranger), token)).rejects.toMatchObject({
		kind: 'forbidden'
	});
	await accounts.acceptInvitationAs(act(ada), token);
	expect(await membershipOf(ada.email)).toEqual([{ role: 'student', labSectionId: null }]);
	await accounts.signIn(from('10.0.0.4'), { email: ada.email, password });
});

test('bench words: drawn by the instructor, a week long, replaced by the next', async () => {
	const given = { course: course.id, labSectionId: course.labSectionId };
	await expect(accounts.makeBenchWords(act(course.student), given)).rejects.toMatchObject({
		kind: 'forbidden'
	});
	const first = await accounts.makeBenchWords(act(course.instructor), given);
	expect(first.words).toMatch(/^[a-z]+-[a-z]+-[a-z]+-[a-z]+$/);
	expect(first.path).toBe(`/join/${first.words}`);
	const days = (new Date(first.expiresAt).getTime() - Date.now()) / 86_400_000;
	expect(days).toBeGreaterThan(6.9);
	expect(days).toBeLessThanOrEqual(7);
	const second = await accounts.makeBenchWords(act(course.instructor), given);
	expect(await accounts.listBenchWords(course.instructor, course.id)).toEqual([second]);
	await expect(accounts.sectionAhead(from('10.0.1.1'), first.words)).rejects.toMatchObject({
		detail: { fields: { words: expect.stringContaining('open nothing') } }
	});
	const spoken = `  ${second.words.replaceAll('-', ', ').toUpperCase()} `;
	expect(await accounts.sectionAhead(from('10.0.1.1'), spoken)).toMatchObject({
		labSection: 'Tuesday',
		words: second.words
	});
	const elsewhere = { course: course.id, labSectionId: '01890000-0000-7000-8000-000000000000' };
	await expect(accounts.makeBenchWords(act(course.instructor), elsewhere)).rejects.toMatchObject({
		kind: 'unprocessable'
	});
});

test('somebody new joins by words: no account before the mailed link and the password', async () => {
	const { words } = await accounts.makeBenchWords(act(course.instructor), {
		course: course.id,
		labSectionId: course.labSectionId
	});
	const email = newAddress();
	await accounts.requestJoin(from('10.0.2.1'), { words, name: 'Dilys Ferrante', email, password });
	expect(await membershipOf(email)).toEqual([]);
	await expect(accounts.signIn(from('10.0.2.1'), { email, password })).rejects.toMatchObject({
		kind: 'unprocessable'
	});
	const token = await tokenMailedTo(email, 'verify');
	expect(await accounts.verificationOf(token)).toMatchObject({ state: 'open', email, labSection: 'Tuesday' });
	await expect(
		accounts.verifyEmail(from('10.0.2.1'), token, { password: 'somebody else’s idea' })
	).rejects.toMatchObject({ detail: { fields: { password: expect.stringContaining('not the password') } } });
	const cookie = await accounts.verifyEmail(from('10.0.2.1'), token, { password });
	expect((await readSession(header(cookie)))?.viewer).toMatchObject({ email, initials: 'D.F.' });
	expect(await membershipOf(email)).toEqual([{ role: 'student', labSectionId: course.labSectionId }]);
	await expect(accounts.verifyEmail(from('10.0.2.1'), token, { password })).rejects.toMatchObject({
		kind: 'conflict'
	});
});

test('an address with an account gets the same answer when joining, and another letter', async () => {
	const { words } = await accounts.makeBenchWords(act(course.instructor), {
		course: course.id,
		labSectionId: course.labSectionId
	});
	const ada = await makePerson();
	const passwordHash = await hashPassword(password);
	await database().update(schema.users).set({ passwordHash }).where(eq(schema.users.id, ada.id));
	await expect(
		accounts.requestJoin(from('10.0.2.2'), {
			words,
			name: 'Not Ada',
			email: ada.email,
			password: 'their own password'
		})
	).resolves.toBeUndefined();
	const [mail] = await until(async () => {
		const mails = await caughtMail(ada.email);
		return mails.length > 0 && mails;
	});
	expect(mail?.text).toContain('It has an account already, and nothing was changed.');
	const [row] = await database().select().from(schema.users).where(eq(schema.users.id, ada.id));
	expect(row).toMatchObject({ name: ada.name, passwordHash });
});

test('somebody signed in joins by words at once, and once', async () => {
	const { words } = await accounts.makeBenchWords(act(course.instructor), {
		course: course.id,
		labSectionId: course.otherLabSectionId
	});
	const ada = await makePerson();
	expect(await accounts.joinByWords(act(ada), { words })).toEqual({
		courseId: course.id,
		slug: course.slug,
		labSection: 'Thursday'
	});
	await expect(accounts.joinByWords(act(ada), { words })).rejects.toMatchObject({ kind: 'conflict' });
	await expect(accounts.joinByWords(act(course.grader), { words })).rejects.toMatchObject({
		kind: 'conflict'
	});
	await expect(
		accounts.joinByWords(act(course.stranger), { words: 'moon moon moon moon' })
	).rejects.toMatchObject({ kind: 'unprocessable' });
});

test('guessing words is limited; right ones do not count', async () => {
	const { words } = await accounts.makeBenchWords(act(course.instructor), {
		course: course.id,
		labSectionId: course.labSectionId
	});
	for (let index = 0; index < 3; index++) await accounts.sectionAhead(from('10.0.3.1'), words);
	const guesses = await Promise.allSettled(
		Array.from({ length: 61 }, (_, index) =>
			accounts.sectionAhead(from('10.0.3.1'), `moon-moon-moon-${'m'.repeat(index + 1)}`)
		)
	);
	const kinds = guesses.map((guess) => (guess as PromiseRejectedResult).reason.kind as string);
	expect(kinds.filter((kind) => kind === 'too-many')).toHaveLength(1);
});

test('a new password by mail: known addresses get a letter, unknown ones the same answer', async () => {
	const ada = await makePerson();
	const passwordHash = await hashPassword(password);
	await database().update(schema.users).set({ passwordHash }).where(eq(schema.users.id, ada.id));
	const unknown = newAddress();
	expect(await accounts.requestReset(from('10.0.4.1'), { email: ada.email })).toBe(
		await accounts.requestReset(from('10.0.4.1'), { email: unknown })
	);
	const open = await readSession(
		header(await accounts.signIn(from('10.0.4.1'), { email: ada.email, password }))
	);
	const token = await tokenMailedTo(ada.email, 'reset');
	expect(await accounts.resetOf(token)).toEqual({ state: 'open', email: ada.email });
	await expect(
		accounts.reset(from('10.0.4.1'), token, { password: 'passwordpassword1' })
	).rejects.toMatchObject({ detail: { fields: { password: expect.stringContaining('Many people') } } });
	const cookie = await accounts.reset(from('10.0.4.1'), token, { password: 'violin harbor moss kite' });
	expect((await readSession(header(cookie)))?.viewer.id).toBe(ada.id);
	expect(open && (await sessionHolds(open.session))).toBe(false);
	await expect(
		accounts.reset(from('10.0.4.1'), token, { password: 'violin harbor moss kite' })
	).rejects.toMatchObject({ kind: 'conflict' });
	await expect(accounts.resetOf('no-such-token')).rejects.toMatchObject({ kind: 'not-found' });
	expect(await caughtMail(unknown)).toEqual([]);
	for (let index = 0; index < 3; index++) await accounts.requestReset(from('10.0.4.1'), { email: unknown });
	await expect(accounts.requestReset(from('10.0.4.1'), { email: unknown })).rejects.toMatchObject({
		kind: 'too-many'
	});
});

test('a reset link is over after an hour', async () => {
	const ada = await makePerson();
	await accounts.requestReset(from('10.0.5.1'), { email: ada.email });
	const token = await tokenMailedTo(ada.email, 'reset');
	await database()
		.update(schema.accountTokens)
		.set({ expiresAt: new Date(Date.now() - 1000) })
		.where(eq(schema.accountTokens.userId, ada.id));
	expect(await accounts.resetOf(token)).toMatchObject({ state: 'expired' });
	await expect(accounts.reset(from('10.0.5.1'), token, { password })).rejects.toMatchObject({
		kind: 'too-late'
	});
});
