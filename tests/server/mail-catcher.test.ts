import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createTransport } from 'nodemailer';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { startMailCatcher } from '../../scripts/mail-catcher.mjs';

type Catcher = Awaited<ReturnType<typeof startMailCatcher>>;

const folder = mkdtempSync(join(tmpdir(), 'meniscus-mail-'));
let catcher: Catcher;

beforeAll(async () => {
	catcher = await startMailCatcher({ folder });
});
afterAll(async () => {
	await catcher.close();
	rmSync(folder, { recursive: true, force: true });
});

const mails = async () =>
	(await (await fetch(`${catcher.pageUrl}/messages.json`)).json()) as Record<string, unknown>[];
const send = (mail: { to: string; bcc?: string; subject: string; text?: string; html?: string }) =>
	createTransport(catcher.smtpUrl).sendMail({ from: 'Meniscus <meniscus@localhost.test>', ...mail });

test('a mail is kept with its envelope, text and links', async () => {
	await send({
		to: 'Nora Lindqvist <nora@example.test>',
		bcc: 'kept@example.test',
		subject: 'Réception: “Enthalpy of vaporization”',
		text: 'Received 16:41.\n\nRead it at http://127.0.0.1:4310/r/1?draft=2. (Or http://127.0.0.1:4310/now)'
	});
	const [mail] = await mails();
	expect(mail).toMatchObject({
		from: '"Meniscus" <meniscus@localhost.test>',
		to: ['nora@example.test', 'kept@example.test'],
		subject: 'Réception: “Enthalpy of vaporization”',
		links: ['http://127.0.0.1:4310/r/1?draft=2', 'http://127.0.0.1:4310/now']
	});
	expect(mail?.['text']).toContain('Received 16:41.');
});

test('the pages show text only: nothing of a mail’s HTML is live', async () => {
	const hostile = '<script>alert(1)</script><img src=x onerror=alert(2)>';
	await send({ to: 'a@example.test', subject: hostile, html: `<p>Hello</p>${hostile}` });
	await send({ to: 'a@example.test', subject: 'plain', text: `${hostile} javascript:alert(3)` });
	const all = await mails();
	const pages = ['/', ...all.map((mail) => `/messages/${String(mail['id'])}`)];
	expect(pages).toHaveLength(4);
	for (const path of pages) {
		const answer = await fetch(catcher.pageUrl + path);
		expect(answer.status).toBe(200);
		expect(answer.headers.get('content-security-policy')).toContain("default-src 'none'");
		expect(await answer.text()).not.toMatch(/<script|<img|href="javascript/);
	}
	expect((await fetch(`${catcher.pageUrl}/messages/none`)).status).toBe(404);
});

test('mails are there after a new start; one cut short is not', async () => {
	const before = await mails();
	await catcher.close();
	writeFileSync(join(folder, '00001796121616980-half.arriving'), 'Subject: hal');
	catcher = await startMailCatcher({ folder });
	expect(await mails()).toEqual(before);
});

test('a page elsewhere cannot empty it, a test can', async () => {
	const fromPage = await fetch(`${catcher.pageUrl}/messages.json`, {
		method: 'DELETE',
		headers: { origin: 'http://elsewhere.test' }
	});
	expect(fromPage.status).toBe(403);
	expect((await mails()).length).toBeGreaterThan(0);
	await fetch(`${catcher.pageUrl}/messages.json`, { method: 'DELETE' });
	expect(await mails()).toEqual([]);
});
