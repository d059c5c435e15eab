import { createServer, type Server } from 'node:net';
import { eq } from 'drizzle-orm';
import type { Jobs } from '../../src/lib/server/jobs';
import { v7 as uuidv7 } from 'uuid';
import { afterAll, afterEach, beforeAll, expect, test } from 'vitest';
import { closeDatabase, connection, database, schema } from '../../src/lib/server/db';
import { env } from '../../src/lib/server/env';
import * as mail from '../../src/lib/server/mail';
import { startJobs } from '../../src/lib/server/process';
import { until } from '../account-requests';
import { caughtMail, freshDatabase, type FreshDatabase } from '../harness';

let fresh: FreshDatabase;
const running: Jobs[] = [];
const work = async () => running.push(await startJobs());

const said = (recipient: string, subject = uuidv7()) =>
	({
		kind: 'reset',
		subject,
		recipient,
		payload: { token: `secret-${subject}`, name: 'Ada Quill' }
	}) as const;
const address = () => `reader.${uuidv7()}@harrow-point.example`;
const rowFor = async (recipient: string) =>
	(await database().select().from(schema.outbox).where(eq(schema.outbox.recipient, recipient)))[0];
const sent = (recipient: string) =>
	until(async () => {
		const row = await rowFor(recipient);
		return row?.sentAt && row;
	});

beforeAll(async () => {
	fresh = await freshDatabase();
});
afterEach(async () => {
	await Promise.all(running.splice(0).map((runner) => runner.stop()));
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

test('what is said twice is mailed once, by however many workers', async () => {
	const recipient = address();
	const once = said(recipient);
	await database().transaction((tx) => mail.enqueue(tx, once));
	await database().transaction((tx) => mail.enqueue(tx, once));
	await Promise.all([work(), work(), work()]);
	const row = await sent(recipient);
	await Promise.all([mail.deliver(row.id), mail.deliver(row.id)]);
	const mails = await caughtMail(recipient);
	expect(mails).toHaveLength(1);
	expect(mails[0]).toMatchObject({ to: [recipient], subject: 'Choose a new password' });
	expect(mails[0]?.links).toContain(`${env().ORIGIN}/reset/${once.payload.token}`);
	expect(row.attempts).toBe(1);
	expect(row.payload).toEqual({ name: 'Ada Quill' });
});

test('a letter is not there without what it tells about', async () => {
	const recipient = address();
	const undone = database().transaction(async (tx) => {
		await mail.enqueue(tx, said(recipient));
		throw new Error('the change failed');
	});
	await expect(undone).rejects.toThrow('the change failed');
	expect(await rowFor(recipient)).toBeUndefined();
	const [jobs] = await connection().sql<{ count: number }[]>`
		select count(*)::int as count from graphile_worker.jobs where key like 'deliver:%'`;
	expect(jobs?.count).toBe(0);
});

test('a mail server that is away is asked again, and what it said is noted', async () => {
	const recipient = address();
	const real = env().SMTP_URL;
	let calls = 0;
	const deaf: Server = createServer((socket) => {
		calls++;
		socket.end('421 away for a while\r\n');
	});
	await new Promise<void>((resolve) => deaf.listen(0, '127.0.0.1', resolve));
	const port = (deaf.address() as { port: number }).port;
	env().SMTP_URL = `smtp://127.0.0.1:${port}`;
	try {
		await database().transaction((tx) => mail.enqueue(tx, said(recipient)));
		await work();
		const tried = await until(async () => {
			const row = await rowFor(recipient);
			return row && row.attempts > 0 && row;
		});
		expect(tried.sentAt).toBeNull();
		expect(tried.lastProblem).toContain('away for a while');
		expect(calls).toBeGreaterThan(0);
	} finally {
		env().SMTP_URL = real;
		deaf.close();
	}
	const row = await sent(recipient);
	expect(row.attempts).toBeGreaterThanOrEqual(2);
	expect(row.lastProblem).toBeNull();
	expect(await caughtMail(recipient)).toHaveLength(1);
});

test('letters whose delivery was lost are found again', async () => {
	const recipient = address();
	await database().transaction((tx) => mail.enqueue(tx, said(recipient)));
	const row = await rowFor(recipient);
	if (!row) throw new Error('no letter');
	await connection().sql`select graphile_worker.remove_job(${`deliver:${row.id}`})`;
	expect(await mail.sweep()).toBe(0);
	await database()
		.update(schema.outbox)
		.set({ createdAt: new Date(Date.now() - 5 * 60_000) })
		.where(eq(schema.outbox.id, row.id));
	expect(await mail.sweep()).toBe(1);
	expect(await mail.sweep()).toBe(0);
	await work();
	await sent(recipient);
	expect(await caughtMail(recipient)).toHaveLength(1);
});

test('the id of a message stays the same for a letter', () => {
	expect(mail.messageId('0189')).toBe(`<0189@${new URL(env().ORIGIN).hostname}>`);
});
