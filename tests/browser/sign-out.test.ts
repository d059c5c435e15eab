import type { Browser, BrowserContext, Page, WebSocketRoute } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { closeDatabase } from '../../src/lib/server/db';
import * as readings from '../../src/lib/server/readings';
import { freshDatabase, startServer, type FreshDatabase, type RunningServer } from '../harness';
import { contextFor, launch } from './chromium';
import { makeScene } from './scene';

/** Signing out of a computer that others use: what is not stored yet is named, and nothing stays behind. */

let fresh: FreshDatabase;
let server: RunningServer;
let browser: Browser;

beforeAll(async () => {
	fresh = await freshDatabase();
	server = await startServer({ databaseUrl: fresh.url });
	browser = await launch();
});
afterAll(async () => {
	await browser?.close();
	await server?.stop();
	await closeDatabase();
	await fresh?.drop();
});

/** A cable to the live service that can be pulled out, while pages still load. */
async function cable(context: BrowserContext): Promise<{ pull(): Promise<void>; plug(): void }> {
	const open = new Set<WebSocketRoute>();
	let pulled = false;
	await context.routeWebSocket(/\/live$/, (socket) => {
		if (pulled) return void socket.close();
		open.add(socket);
		socket.connectToServer();
	});
	return {
		pull: async () => {
			pulled = true;
			await Promise.all([...open].map((socket) => socket.close()));
			open.clear();
		},
		plug: () => (pulled = false)
	};
}

const keptFor = (page: Page, person: string) =>
	page.evaluate(async (id) => {
		const databases = (await indexedDB.databases()).flatMap(({ name }) => (name?.includes(id) ? [name] : []));
		return { databases, keys: Object.keys(localStorage).filter((key) => key.includes(id)) };
	}, person);

async function change(page: Page, text: string) {
	const cell = page.getByLabel('Row 1, t', { exact: true });
	await cell.fill(text);
	await cell.press('Enter');
}

async function toSignOut(page: Page, name: string) {
	await page.locator('summary', { hasText: name }).click();
	await page.getByRole('link', { name: 'Sign out' }).click();
	await page.getByRole('heading', { name: 'Sign out' }).waitFor();
}

it('names what is not stored, keeps it for another try, and wipes it on signing out', async () => {
	const scene = await makeScene('draft');
	const { student, mate } = scene;
	const bench = `/c/${scene.slug}/w/${scene.workId}/bench`;
	const context = await contextFor(browser, server.origin, student);
	const live = await cable(context);
	const page = await context.newPage();
	await page.goto(bench);
	await page.getByText(/Stored \d\d:\d\d\./).waitFor();
	// Something of somebody else at this computer.
	await page.evaluate((id) => localStorage.setItem(`meniscus:${id}:read:r`, '[]'), mate.id);

	await live.pull();
	await page.getByText(/Offline/).waitFor();
	await change(page, '83.02');
	await page.getByText('Offline. 1 reading is on this device only.').waitFor();
	await toSignOut(page, student.name);
	const named = page.getByRole('link', { name: 'Readings of Enthalpy of vaporization of water' });
	await named.waitFor();
	await page.getByRole('button', { name: 'Sign out and lose it' }).waitFor();

	live.plug();
	await named.click();
	await page.getByText(/Stored \d\d:\d\d\.|Online again/).waitFor();
	const typed = async () => (await readings.storedReadings(student, scene.workId)).readings.tables;
	await expect.poll(async () => (await typed())['readings']?.[0]?.cells['t']).toBe('83.02');
	await toSignOut(page, student.name);
	await page.getByText('Everything you did here is stored.').waitFor();
	expect((await keptFor(page, student.id)).databases).not.toEqual([]);

	await page.goto(bench);
	await page.getByText(/Stored \d\d:\d\d\./).waitFor();
	await live.pull();
	await page.getByText(/Offline/).waitFor();
	await change(page, '84.00');
	await page.getByText('Offline. 1 reading is on this device only.').waitFor();
	await toSignOut(page, student.name);
	await page.getByRole('button', { name: 'Sign out and lose it' }).click();
	await page.waitForURL('**/sign-in');
	expect(await keptFor(page, student.id)).toEqual({ databases: [], keys: [] });
	expect((await keptFor(page, mate.id)).keys).toEqual([`meniscus:${mate.id}:read:r`]);
	expect((await page.request.get('/api/v1/account')).status()).toBe(401);
	expect((await typed())['readings']?.[0]?.cells['t']).toBe('83.02');
	await context.close();
});

it('signs out everywhere', async () => {
	const { mate } = await makeScene('draft');
	const here = await (await contextFor(browser, server.origin, mate)).newPage();
	const elsewhere = await (await contextFor(browser, server.origin, mate)).newPage();
	await elsewhere.goto('/now');
	expect(new URL(elsewhere.url()).pathname).toBe('/now');
	await here.goto('/now');
	await toSignOut(here, mate.name);
	await here.getByRole('button', { name: 'Sign out everywhere' }).click();
	await here.waitForURL('**/sign-in');
	await elsewhere.goto('/now');
	expect(new URL(elsewhere.url()).pathname).toBe('/sign-in');
});

it('wipes nothing when the server cannot be reached', async () => {
	const { student, slug, workId } = await makeScene('draft');
	const context = await contextFor(browser, server.origin, student);
	const page = await context.newPage();
	await page.goto(`/c/${slug}/w/${workId}/bench`);
	await page.getByText(/Stored \d\d:\d\d\./).waitFor();
	await toSignOut(page, student.name);
	const before = await keptFor(page, student.id);
	expect(before.databases).not.toEqual([]);
	await context.setOffline(true);
	await page.getByRole('button', { name: 'Sign out', exact: true }).click();
	await page.getByText('Not signed out: Meniscus could not be reached.').waitFor();
	expect(await keptFor(page, student.id)).toEqual(before);
	await context.setOffline(false);
	expect((await page.request.get('/api/v1/account')).status()).toBe(200);
	await context.close();
});
