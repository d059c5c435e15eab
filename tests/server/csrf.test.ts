import { afterAll, beforeAll, expect, test } from 'vitest';
import { eq } from 'drizzle-orm';
import { openSession } from '../../src/lib/server/auth';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import * as account from '../../src/routes/api/v1/account/+server';
import * as sessions from '../../src/routes/api/v1/account/sessions/+server';
import * as health from '../../src/routes/api/v1/health/+server';
import { send, type Sent } from '../account-requests';
import { makePerson } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';

let fresh: FreshDatabase;
let cookie: string;
let id: string;
const patch: Sent = { method: 'PATCH', route: '/api/v1/account', body: { name: 'Changed Name' } };

beforeAll(async () => {
	fresh = await freshDatabase();
	const person = await makePerson('Before Name');
	id = person.id;
	const opened = await openSession(database(), id, 'a browser');
	cookie = `other=1; ${opened.name}=${opened.value}`;
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

const nameNow = async () => {
	const [row] = await database().select().from(schema.users).where(eq(schema.users.id, id));
	return row?.name;
};

test.each<[string, Partial<Sent>, number]>([
	['from a foreign page', { headers: { origin: 'https://elsewhere.example' } }, 403],
	['from a page that hides where it is', { headers: { origin: 'null' } }, 403],
	['without an Origin', { headers: { origin: '' } }, 403],
	['as a form', { headers: { 'content-type': 'application/x-www-form-urlencoded' }, body: 'name=x' }, 422],
	[
		'as a form with files',
		{ headers: { 'content-type': 'multipart/form-data; boundary=x' }, body: '--x--' },
		422
	],
	['as text that is JSON', { headers: { 'content-type': 'text/plain' } }, 422],
	['as bytes where JSON belongs', { headers: { 'content-type': 'application/octet-stream' } }, 422],
	['without a type', { headers: { 'content-type': '' } }, 422],
	['without its length', { headers: { 'content-length': '', 'transfer-encoding': 'chunked' } }, 422],
	['larger than any route takes', { headers: { 'content-length': String(3 * 1024 * 1024) } }, 413]
])('a write with the cookie, %s, is refused and changes nothing', async (_, change, status) => {
	const response = await send(account.PATCH, { ...patch, cookie, ...change });
	expect(response.status).toBe(status);
	expect(response.headers.get('content-type')).toContain('application/problem+json');
	expect(await response.json()).toMatchObject({ status, type: expect.stringContaining('urn:meniscus:') });
	expect(await nameNow()).toBe('Before Name');
});

test('a foreign page cannot sign anybody out', async () => {
	const headers = { origin: 'https://elsewhere.example' };
	const sent: Sent = { method: 'DELETE', route: '/api/v1/account/sessions', cookie, headers };
	expect((await send(sessions.DELETE, sent)).status).toBe(403);
	expect((await send(account.GET, { route: '/api/v1/account', cookie })).status).toBe(200);
});

test('our own pages write, and every answer carries the headers', async () => {
	const response = await send(account.PATCH, { ...patch, cookie, body: { name: 'After Name' } });
	expect(response.status).toBe(200);
	expect(await response.json()).toMatchObject({ name: 'After Name' });
	expect(await nameNow()).toBe('After Name');
	const headers = Object.fromEntries(response.headers);
	expect(headers).toMatchObject({
		'x-content-type-options': 'nosniff',
		'referrer-policy': 'same-origin',
		'content-security-policy': "default-src 'none'; frame-ancestors 'none'",
		'cache-control': 'no-store'
	});
	expect(headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
	expect(headers['strict-transport-security']).toBeUndefined();
});

test('without a session: 401 in the API, health for anyone', async () => {
	const response = await send(account.GET, { route: '/api/v1/account' });
	expect(response.status).toBe(401);
	expect(await response.json()).toMatchObject({ title: 'Sign in first' });
	const well = await send(health.GET, { route: '/api/v1/health' });
	expect(await well.json()).toMatchObject({ state: 'well', databaseMs: expect.any(Number) });
});

test('a page at the desk sends a stranger to sign in, and back again', async () => {
	const page: Sent = { route: '/(desk)/c/[course]', params: { course: 'pc310' } };
	const thrown = await send(() => new Response('desk'), page).catch((problem: unknown) => problem);
	expect(thrown).toMatchObject({
		status: 303,
		location: expect.stringMatching(/^\/sign-in\?next=/)
	});
	expect(await (await send(() => new Response('desk'), { ...page, cookie })).text()).toBe('desk');
});
