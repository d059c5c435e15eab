import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, expect, test } from 'vitest';
import * as accounts from '../../src/lib/server/accounts';
import { openSession, type Viewer } from '../../src/lib/server/auth';
import * as courses from '../../src/lib/server/courses';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import { plainName } from '../../src/lib/server/files';
import * as readings from '../../src/lib/server/readings';
import * as account from '../../src/routes/api/v1/account/+server';
import * as dates from '../../src/routes/api/v1/assignments/[assignment]/dates/+server';
import * as extensions from '../../src/routes/api/v1/assignments/[assignment]/extensions/+server';
import * as invitations from '../../src/routes/api/v1/courses/[course]/invitations/+server';
import * as people from '../../src/routes/api/v1/courses/[course]/people/+server';
import * as teams from '../../src/routes/api/v1/courses/[course]/teams/+server';
import * as versions from '../../src/routes/api/v1/documents/[document]/versions/+server';
import { send, type Sent } from '../account-requests';
import { makeCourse, makePerson, type MadeCourse } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';

let fresh: FreshDatabase;
let course: MadeCourse;
let elsewhere: MadeCourse;
let cookieOf: Map<string, string>;

const signIn = async (person: Viewer) => {
	const { name, value } = await openSession(database(), person.id, 'a browser');
	return `${name}=${value}`;
};

beforeAll(async () => {
	fresh = await freshDatabase();
	course = await makeCourse();
	elsewhere = await makeCourse();
	cookieOf = new Map([
		['instructor', await signIn(course.instructor)],
		['student', await signIn(course.student)],
		['somebody', await signIn(await makePerson('Some Body'))]
	]);
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

const as = (who: string): { cookie: string } => ({ cookie: cookieOf.get(who) ?? '' });
const dueDates = { dueLocal: '2026-12-09T10:00', closesLocal: '2026-12-10T10:00' };
const ofCourse = (leaf: string) => ({
	route: `/api/v1/courses/[course]/${leaf}`,
	params: { course: course.slug }
});
const ofAssignment = (leaf: string) => ({
	route: `/api/v1/assignments/[assignment]/${leaf}`,
	params: { assignment: course.assignmentId }
});

const texts = [
	['U+0000', 'a\0b'],
	['half of a surrogate pair', 'a\ud800b']
] as const;

test.each(texts)('%s in a text field is answered with the name of the field', async (_, text) => {
	const asked: [Parameters<typeof send>[0], Sent, string][] = [
		[
			account.PATCH,
			{ method: 'PATCH', route: '/api/v1/account', body: { name: text }, ...as('somebody') },
			'name'
		],
		[
			teams.POST,
			{
				method: 'POST',
				...ofCourse('teams'),
				body: { labSectionId: course.labSectionId, name: text },
				...as('instructor')
			},
			'name'
		],
		[
			invitations.POST,
			{
				method: 'POST',
				...ofCourse('invitations'),
				body: { email: 'new@harrow-point.example', role: 'student', name: text },
				...as('instructor')
			},
			'name'
		],
		[
			extensions.POST,
			{
				method: 'POST',
				...ofAssignment('extensions'),
				body: { ...dueDates, teamId: course.teamId, reason: text },
				...as('instructor')
			},
			'reason'
		]
	];
	for (const [handler, sent, field] of asked) {
		const response = await send(handler, sent);
		expect(response.status, sent.route).toBe(422);
		const problem = (await response.json()) as { fields?: Record<string, string> };
		expect(Object.keys(problem.fields ?? {}), sent.route).toEqual([field]);
	}
});

test('the same holds for forms, for keys, and for what is nested without end', async () => {
	const visitor = { address: '192.0.2.7', client: '' };
	await expect(
		accounts.signIn(visitor, { email: 'a\0@harrow-point.example', password: 'x' })
	).rejects.toMatchObject({
		kind: 'unprocessable'
	});
	const patch = { method: 'PATCH', route: '/api/v1/account', ...as('somebody') };
	expect((await send(account.PATCH, { ...patch, body: '{"a\\u0000":1}' })).status).toBe(422);
	const deep = `${'['.repeat(100_000)}${']'.repeat(100_000)}`;
	expect((await send(account.PATCH, { ...patch, body: deep })).status).toBe(422);
});

test.each(['Ada\nBcc: x@harrow-point.example', 'Ada\u202egnirps', 'Ada\u0007'])(
	'%j is no name',
	async (name) => {
		const sent = { method: 'PATCH', route: '/api/v1/account', body: { name }, ...as('somebody') };
		expect((await send(account.PATCH, sent)).status).toBe(422);
	}
);

test.each([
	'2026-13-01T10:00',
	'2026-02-30T10:00',
	'2026-12-09T25:00',
	'0000-01-01T00:00',
	'2026-12-09T10:61'
])('%s is no time at which a report could be due', async (when) => {
	const body = { dueLocal: when, closesLocal: when };
	const sent = { method: 'PATCH', ...ofAssignment('dates'), body, ...as('instructor') };
	expect((await send(dates.PATCH, sent)).status).toBe(422);
});

test('more time is given to the course’s own students and teams alone', async () => {
	const give = (whom: Record<string, string>) =>
		send(extensions.POST, {
			method: 'POST',
			...ofAssignment('extensions'),
			body: { ...dueDates, reason: 'Fire alarm', ...whom },
			...as('instructor')
		});
	const before = await database().$count(schema.extensions);
	expect((await give({ userId: '01900000-0000-7000-8000-000000000000' })).status).toBe(422);
	expect((await give({ userId: course.instructor.id })).status).toBe(422);
	expect((await give({ teamId: elsewhere.teamId })).status).toBe(422);
	expect(await database().$count(schema.extensions)).toBe(before);
	expect((await give({ teamId: course.teamId })).status).toBe(200);
});

test('a cursor that is not ours is said to be none', async () => {
	const cursors = [['a', 'b', 'student'], [{}, [], {}], ['a\0', course.instructor.id, 'student'], null];
	for (const cursor of cursors) {
		const after = Buffer.from(JSON.stringify(cursor)).toString('base64url');
		await expect(
			courses.people(course.instructor, course.id, { after, limit: 5 }),
			JSON.stringify(cursor)
		).rejects.toMatchObject({ kind: 'unprocessable' });
	}
	expect((await send(people.GET, { ...ofCourse('people'), ...as('instructor') })).status).toBe(200);
});

test('a cursor of versions is a number', async () => {
	const { document } = await readings.openBench(course.student, course.workId);
	for (const after of ['x', '-1', '1e3', ''])
		await expect(
			readings.versionsOf(course.student, document.id, { after, limit: 5 }),
			after
		).rejects.toMatchObject({ kind: 'unprocessable' });
	const sent = { route: '/api/v1/documents/[document]/versions', params: { document: document.id } };
	expect((await send(versions.GET, { ...sent, ...as('student') })).status).toBe(200);
});

test('an address that names no work is not here', async () => {
	for (const id of ['abc', '', "' or true --"])
		await expect(courses.workOf(course.instructor, id)).rejects.toMatchObject({ kind: 'not-found' });
});

test('an address of a page that holds U+0000 is not here', async () => {
	const response = await send(() => new Response('shown'), { route: '/join/%00' });
	expect(response.status).toBe(404);
});

test.each([
	['larger than names and passwords', { 'content-length': '20000' }, 413],
	['in pieces that tell no length', { 'content-length': '', 'transfer-encoding': 'chunked' }, 422]
])('a form %s is not read', async (_, headers, status) => {
	const form = { 'content-type': 'application/x-www-form-urlencoded', ...headers };
	const sent = { method: 'POST', route: '/sign-in', body: 'email=x', headers: form };
	expect((await send(() => new Response('read'), sent)).status).toBe(status);
});

test('a version of a text keeps the text, whatever was typed into it', async () => {
	const { document } = await readings.openBench(course.student, course.workId);
	const version = { documentId: document.id, seq: 1, byId: course.student.id };
	expect(await readings.storeVersion(database(), { ...version, text: 'a\0b\ud800' })).toBe(true);
	const [kept] = await database()
		.select({ text: schema.documentVersions.text })
		.from(schema.documentVersions)
		.where(eq(schema.documentVersions.documentId, document.id));
	expect(kept?.text).toBe('a\ufffdb\ufffd');
});

test('the name of a file is text even where it is cut', () => {
	const name = plainName(`x${'🧪'.repeat(100)}y`);
	expect(name.isWellFormed()).toBe(true);
	expect(name.endsWith('🧪y')).toBe(true);
});
