import { eq } from 'drizzle-orm';
import postgres from 'postgres';
import { afterAll, beforeAll, expect, test } from 'vitest';
import * as accounts from '../../src/lib/server/accounts';
import {
	hashPassword,
	openSession,
	readSession,
	revokeChannel,
	sessionHolds,
	type Viewer
} from '../../src/lib/server/auth';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import { makePerson } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';

let fresh: FreshDatabase;
const password = 'copper rowan tide ladder';
const from = (address: string) => ({ address, client: 'a browser' });
const header = (cookie: { name: string; value: string }) => `${cookie.name}=${cookie.value}`;

async function person(): Promise<Viewer> {
	const made = await makePerson();
	await database()
		.update(schema.users)
		.set({ passwordHash: await hashPassword(password) })
		.where(eq(schema.users.id, made.id));
	return made;
}

beforeAll(async () => {
	fresh = await freshDatabase();
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

test('signing in opens a session for that person, however the address is spelled', async () => {
	const ada = await person();
	const cookie = await accounts.signIn(from('10.0.0.1'), {
		email: ` ${ada.email.toUpperCase()} `,
		password
	});
	expect(cookie.attributes).toMatchObject({ httpOnly: true, sameSite: 'lax', path: '/', secure: false });
	const open = await readSession(header(cookie));
	expect(open?.viewer).toMatchObject({ id: ada.id, email: ada.email, theme: 'system' });
	const [acts] = await database().select().from(schema.audit).where(eq(schema.audit.subjectId, ada.id));
	expect(acts?.action).toBe('account.signIn');
});

test('the cookie’s value stands nowhere in the database', async () => {
	const ada = await person();
	const cookie = await accounts.signIn(from('10.0.0.2'), { email: ada.email, password });
	const sql = postgres(fresh.ownerUrl, { max: 1 });
	const tables = await sql<{ name: string }[]>`
		select quote_ident(table_name) as name from information_schema.tables where table_schema = 'public' and table_type = 'BASE TABLE'`;
	const hex = Buffer.from(cookie.value).toString('hex');
	for (const { name } of tables) {
		const rows = await sql.unsafe(
			`select 1 from ${name} t where position($1 in t::text) > 0 or position($2 in t::text) > 0`,
			[cookie.value, hex]
		);
		expect(rows.length, name).toBe(0);
	}
	await sql.end();
	expect(tables.length).toBeGreaterThan(20);
	const [row] = await database().select().from(schema.sessions).where(eq(schema.sessions.userId, ada.id));
	expect(row?.tokenSha256).toHaveLength(32);
});

test('a wrong password and an unknown address get the same answer', async () => {
	const ada = await person();
	const wrong = accounts.signIn(from('10.0.0.3'), { email: ada.email, password: 'not this one at all' });
	const unknown = accounts.signIn(from('10.0.0.3'), { email: 'nobody@nowhere.example', password });
	const answers = await Promise.allSettled([wrong, unknown]);
	for (const answer of answers) {
		expect(answer).toMatchObject({
			status: 'rejected',
			reason: { kind: 'unprocessable', message: 'E-mail or password does not match.', detail: {} }
		});
	}
});

test('a wrong password and an unknown address take the same work', async () => {
	const ada = await person();
	const time = async (email: string, index: number) => {
		const begun = performance.now();
		await accounts.signIn(from(`10.1.0.${index}`), { email, password: 'wrong wrong' }).catch(() => undefined);
		return performance.now() - begun;
	};
	const known: number[] = [];
	const unknown: number[] = [];
	for (let index = 0; index < 9; index++) {
		known.push(await time(ada.email, index));
		unknown.push(await time(`nobody${index}@nowhere.example`, index));
	}
	const median = (values: number[]) => values.sort((a, b) => a - b)[4] ?? 0;
	// Without the second hash the unknown one would take a small part of the time: hashing dominates.
	expect(median(unknown)).toBeGreaterThan(median(known) * 0.5);
	expect(median(known)).toBeGreaterThan(median(unknown) * 0.5);
});

test('an account is closed to guesses after ten, known or not, whatever address they come from', async () => {
	const ada = await person();
	for (const email of [ada.email, 'somebody.else@nowhere.example']) {
		const guesses = await Promise.allSettled(
			Array.from({ length: 14 }, (_, index) =>
				accounts.signIn(from(`10.2.0.${index}`), { email, password: 'a guess' })
			)
		);
		const kinds = guesses.map((guess) => (guess as PromiseRejectedResult).reason.kind as string);
		expect(
			kinds.filter((kind) => kind === 'unprocessable'),
			email
		).toHaveLength(10);
		expect(
			kinds.filter((kind) => kind === 'too-many'),
			email
		).toHaveLength(4);
	}
	await expect(accounts.signIn(from('10.2.1.1'), { email: ada.email, password })).rejects.toMatchObject({
		kind: 'too-many',
		message: 'Too many tries. Wait 15 minutes.'
	});
});

test('an address is closed after a hundred guesses; a good sign-in does not count', async () => {
	const ada = await person();
	const address = from('10.3.0.1');
	for (let index = 0; index < 5; index++) await accounts.signIn(address, { email: ada.email, password });
	const guesses = await Promise.allSettled(
		Array.from({ length: 101 }, (_, index) =>
			accounts.signIn(address, { email: `guess${index}@nowhere.example`, password: 'a guess' })
		)
	);
	const refused = guesses.filter((guess) => (guess as PromiseRejectedResult).reason.kind === 'too-many');
	expect(refused).toHaveLength(1);
	await expect(accounts.signIn(address, { email: ada.email, password })).rejects.toMatchObject({
		kind: 'too-many'
	});
	await expect(accounts.signIn(from('10.3.0.2'), { email: ada.email, password })).resolves.toBeDefined();
});

test('an unconfirmed address cannot sign in, and only the right password learns so', async () => {
	const ada = await person();
	await database().update(schema.users).set({ emailVerifiedAt: null }).where(eq(schema.users.id, ada.id));
	await expect(accounts.signIn(from('10.4.0.1'), { email: ada.email, password })).rejects.toMatchObject({
		kind: 'forbidden'
	});
	await expect(
		accounts.signIn(from('10.4.0.1'), { email: ada.email, password: 'wrong' })
	).rejects.toMatchObject({ kind: 'unprocessable' });
});

test('a session ends at its time, and use past half of it moves the end on', async () => {
	const ada = await person();
	const cookie = await openSession(database(), ada.id, 'a browser');
	const setExpiry = (days: number) =>
		database()
			.update(schema.sessions)
			.set({ expiresAt: new Date(Date.now() + days * 86_400_000) })
			.where(eq(schema.sessions.userId, ada.id));
	await setExpiry(20);
	expect((await readSession(header(cookie)))?.cookie).toBeUndefined();
	await setExpiry(10);
	expect((await readSession(header(cookie)))?.cookie?.value).toBe(cookie.value);
	const [row] = await database().select().from(schema.sessions).where(eq(schema.sessions.userId, ada.id));
	expect((row?.expiresAt.getTime() ?? 0) - Date.now()).toBeGreaterThan(29 * 86_400_000);
	await setExpiry(-1);
	expect(await readSession(header(cookie))).toBeNull();
	expect(await readSession('meniscus=nonsense')).toBeNull();
	expect(await readSession(null)).toBeNull();
});

test('changing the password ends the other sessions and rings for live sockets', async () => {
	const ada = await person();
	const here = await openSession(database(), ada.id, 'here');
	const there = await openSession(database(), ada.id, 'there');
	const hereOpen = await readSession(header(here));
	const thereOpen = await readSession(header(there));
	if (!hereOpen || !thereOpen) throw new Error('no sessions');
	const listener = postgres(fresh.url, { max: 1 });
	const rung = new Promise<string>((resolve) => void listener.listen(revokeChannel, resolve));
	await listener`select 1`;
	const act = { viewer: ada };
	await expect(
		accounts.changePassword(act, hereOpen.session, { current: 'wrong', next: 'violin harbor moss kite' })
	).rejects.toMatchObject({ detail: { fields: { current: expect.stringContaining('present password') } } });
	await accounts.changePassword(act, hereOpen.session, {
		current: password,
		next: 'violin harbor moss kite'
	});
	expect(await rung).toBe(ada.id);
	await listener.end();
	expect(await sessionHolds(hereOpen.session)).toBe(true);
	expect(await sessionHolds(thereOpen.session)).toBe(false);
	await expect(accounts.signIn(from('10.5.0.1'), { email: ada.email, password })).rejects.toMatchObject({
		kind: 'unprocessable'
	});
	await accounts.signIn(from('10.5.0.1'), { email: ada.email, password: 'violin harbor moss kite' });
});

test('signing out ends one session, signing out everywhere all', async () => {
	const ada = await person();
	const cookies = await Promise.all(['a', 'b', 'c'].map((name) => openSession(database(), ada.id, name)));
	const open = await Promise.all(cookies.map((cookie) => readSession(header(cookie))));
	const [first, second] = open;
	if (!first || !second) throw new Error('no sessions');
	await accounts.signOut({ viewer: ada }, first.session);
	expect(await sessionHolds(first.session)).toBe(false);
	const listed = await accounts.sessionsOf(ada, second.session);
	expect(listed.map((session) => [session.client, session.current]).sort()).toEqual([
		['b', true],
		['c', false]
	]);
	await accounts.signOutEverywhere({ viewer: ada });
	for (const cookie of cookies) expect(await readSession(header(cookie))).toBeNull();
});

test('the profile keeps what is left out, and says what does not hold', async () => {
	const ada = await person();
	expect(await accounts.changeProfile({ viewer: ada }, { initials: 'A.Q.', theme: 'dark' })).toMatchObject({
		name: ada.name,
		initials: 'A.Q.',
		theme: 'dark'
	});
	await expect(accounts.changeProfile({ viewer: ada }, { initials: 'far too long' })).rejects.toMatchObject({
		kind: 'unprocessable',
		detail: { fields: { initials: expect.stringContaining('One to five letters') } }
	});
});
