import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { openSession } from '../../src/lib/server/auth';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import * as invitations from '../../src/routes/api/v1/courses/[course]/invitations/+server';
import * as rest from '../../src/routes/api/v1/[...rest]/+server';
import { send } from '../account-requests';
import { makeCourse, type MadeCourse } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';

let fresh: FreshDatabase;
let course: MadeCourse;
let cookie: string;

beforeAll(async () => {
	fresh = await freshDatabase();
	course = await makeCourse();
	const opened = await openSession(database(), course.instructor.id, 'a browser');
	cookie = `${opened.name}=${opened.value}`;
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

const invite = (body: unknown, key?: string, as = cookie) =>
	send(invitations.POST, {
		method: 'POST',
		route: '/api/v1/courses/[course]/invitations',
		params: { course: course.slug },
		cookie: as,
		headers: key ? { 'idempotency-key': key } : {},
		body
	});

const mailed = async (recipient: string) =>
	database()
		.select()
		.from(schema.outbox)
		.where(and(eq(schema.outbox.recipient, recipient), eq(schema.outbox.kind, 'invitation')));

test('two at once with the same key: done once, answered twice the same', async () => {
	const body = { email: 'twice@harrow-point.example', role: 'student' };
	const answers = await Promise.all(Array.from({ length: 6 }, () => invite(body, 'same-key')));
	expect(answers.map((answer) => answer.status)).toEqual([201, 201, 201, 201, 201, 201]);
	const texts = await Promise.all(answers.map((answer) => answer.text()));
	expect(new Set(texts).size).toBe(1);
	expect(await mailed(body.email)).toHaveLength(1);
	expect(await (await invite(body, 'same-key')).text()).toBe(texts[0]);
	expect(await mailed(body.email)).toHaveLength(1);
});

test('the same key with another body is refused', async () => {
	const email = 'other@harrow-point.example';
	expect((await invite({ email, role: 'student' }, 'one-key')).status).toBe(201);
	const again = await invite({ email, role: 'grader' }, 'one-key');
	expect(again.status).toBe(422);
	expect(await again.json()).toMatchObject({ detail: expect.stringContaining('Idempotency-Key') });
	expect(await mailed(email)).toHaveLength(1);
});

test('without a key, or with another person’s same key, it is done again', async () => {
	const email = 'again@harrow-point.example';
	await invite({ email, role: 'student' });
	await invite({ email, role: 'student' });
	expect(await mailed(email)).toHaveLength(2);
});

test('a refusal is not kept under the key', async () => {
	const email = 'refused@harrow-point.example';
	const wrong = { email, role: 'student', labSectionId: '01890000-0000-7000-8000-000000000000' };
	expect((await invite(wrong, 'mended-key')).status).toBe(422);
	expect((await invite({ email, role: 'student' }, 'mended-key')).status).toBe(201);
});

test('what does not hold is named by field', async () => {
	const response = await invite({ email: 'no address', role: 'friend' });
	expect(response.status).toBe(422);
	const problem = (await response.json()) as { fields: Record<string, string> };
	expect(Object.keys(problem.fields).sort()).toEqual(['email', 'role']);
	expect(problem.fields['email']).toBe('This is not an e-mail address: name@place.example.');
});

test('a stranger to the course gets the answer of a course that is not there', async () => {
	const opened = await openSession(database(), course.stranger.id, 'a browser');
	const as = `${opened.name}=${opened.value}`;
	const foreign = await invite({ email: 'x@harrow-point.example', role: 'student' }, undefined, as);
	const absent = await send(rest.fallback, { route: '/api/v1/[...rest]', params: { rest: 'nowhere' } });
	expect(foreign.status).toBe(404);
	expect(await foreign.json()).toEqual(await absent.json());
});
