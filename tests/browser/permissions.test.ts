import { readdirSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { operations } from '../../src/lib/contracts/manifest';
import type { Viewer } from '../../src/lib/server/auth';
import { openSession } from '../../src/lib/server/auth';
import { closeDatabase, database } from '../../src/lib/server/db';
import { freshDatabase, startServer, type FreshDatabase, type RunningServer } from '../harness';
import { pageRows } from './page-table';
import { apiRows, personas, type Persona, type Row, type Scene } from './permission-table';
import { makeScene } from './scene';

let fresh: FreshDatabase;
let server: RunningServer;

beforeAll(async () => {
	fresh = await freshDatabase();
	server = await startServer({ databaseUrl: fresh.url });
});
afterAll(async () => {
	await server?.stop();
	await closeDatabase();
	await fresh?.drop();
});

function viewerOf(scene: Scene & { administrator: Viewer }, persona: Persona): Viewer | null {
	return persona === 'nobody' ? null : scene[persona];
}

async function cookieOf(viewer: Viewer | null): Promise<Record<string, string>> {
	if (!viewer) return {};
	const cookie = await openSession(database(), viewer.id, 'permissions test');
	return { cookie: `${cookie.name}=${cookie.value}` };
}

const fill = (path: string, params: Record<string, string>) =>
	path.replaceAll(/[{[]+(\w+)[}\]]+/g, (_, name: string) => {
		const value = params[name];
		if (value === undefined) throw new Error(`${path}: no ${name}`);
		return encodeURIComponent(value);
	});

async function ask(
	method: string,
	path: string,
	row: Row,
	scene: Scene & { administrator: Viewer },
	persona: Persona
) {
	const call = row.call?.(scene) ?? {};
	const query = call.query ? `?${new URLSearchParams(call.query).toString()}` : '';
	const answer = await fetch(`${server.origin}/api/v1${fill(path, call.params ?? {})}${query}`, {
		method,
		redirect: 'manual',
		headers: {
			...(await cookieOf(viewerOf(scene, persona))),
			...(method === 'GET' ? {} : { origin: server.origin }),
			...(call.raw
				? { 'content-type': call.raw.type }
				: call.body === undefined
					? {}
					: { 'content-type': 'application/json' }),
			...(call.revision === undefined ? {} : { 'if-match': `"${call.revision}"` })
		},
		...(call.raw
			? { body: call.raw.text }
			: call.body === undefined
				? {}
				: { body: JSON.stringify(call.body) })
	});
	await answer.arrayBuffer();
	return answer.status;
}

/** Who is refused asks first, so that what those who may do change cannot open or close a door for them. */
const refusedFirst = (row: Row) =>
	[...personas].sort(
		(a, b) =>
			Number((row.answers[a] ?? row.answers.else) < 300) - Number((row.answers[b] ?? row.answers.else) < 300)
	);

const keyOf = (operation: { method: string; path: string }) => `${operation.method} ${operation.path}`;

describe('the permission table', () => {
	it('has a row for every operation and no row without one', () => {
		expect(Object.keys(apiRows).sort()).toEqual(operations.map(keyOf).sort());
	});
	it('has a row for every page and no row without one', () => {
		const root = new URL('../../src/routes', import.meta.url).pathname;
		// A folder that only sends on, such as the root, has a server file alone.
		const pages = readdirSync(root, { recursive: true, encoding: 'utf8' })
			.filter((file) => /(^|\/)\+page(\.svelte|\.server\.ts)$/.test(file))
			.map((file) => `/${file.replace(/\/?\+page\.[a-z.]+$/, '')}`);
		expect(Object.keys(pageRows).sort()).toEqual([...new Set(pages)].sort());
	});
});

describe.each(Object.entries(apiRows))('%s', (key, row) => {
	it('answers each person as the table says', async () => {
		const [method = '', path = ''] = key.split(' ');
		const scene = await makeScene(row.stage);
		const answers: Record<string, number> = {};
		const wanted: Record<string, number> = {};
		for (const persona of refusedFirst(row)) {
			answers[persona] = await ask(method, path, row, scene, persona);
			wanted[persona] = row.answers[persona] ?? row.answers.else;
		}
		expect(answers).toEqual(wanted);
	});
});

describe.each(Object.entries(pageRows))('page %s', (route, row) => {
	it('answers each person as the table says', async () => {
		const scene = await makeScene(row.stage);
		const answers: Record<string, number> = {};
		const wanted: Record<string, number> = {};
		const path = fill(route.replaceAll(/\/\([a-z]+\)/g, '') || '/', row.params?.(scene) ?? {});
		for (const persona of personas) {
			const answer = await fetch(server.origin + path, {
				redirect: 'manual',
				headers: await cookieOf(viewerOf(scene, persona))
			});
			await answer.arrayBuffer();
			answers[persona] = answer.status;
			wanted[persona] = row.answers[persona] ?? row.answers.else;
		}
		expect(answers).toEqual(wanted);
	});
});
