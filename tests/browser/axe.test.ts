import AxeBuilder from '@axe-core/playwright';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Viewer } from '../../src/lib/server/auth';
import { closeDatabase } from '../../src/lib/server/db';
import { freshDatabase, startServer, type FreshDatabase, type RunningServer } from '../harness';
import { contextFor, launch } from './chromium';
import { pageRows } from './page-table';
import { personas, type Scene, type Stage } from './permission-table';
import { makeScene } from './scene';

let fresh: FreshDatabase;
let server: RunningServer;
let browser: Browser;
const scenes = new Map<Stage, Promise<Scene & { administrator: Viewer }>>();
const sceneAt = (stage: Stage) => {
	const made = scenes.get(stage) ?? makeScene(stage);
	scenes.set(stage, made);
	return made;
};

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

/** Pages that answer somebody; those that only send on have nothing to look at. */
const shown = Object.entries(pageRows).flatMap(([route, row]) => {
	const persona = personas.find((one) => (row.answers[one] ?? row.answers.else) === 200);
	return persona ? [{ route, row, persona }] : [];
});

describe.each(shown)('$route as $persona', ({ route, row, persona }) => {
	it.each(['light', 'dark'] as const)('has nothing against it in %s', async (colorScheme) => {
		const scene = await sceneAt(row.stage);
		const viewer = persona === 'nobody' ? null : scene[persona];
		const context = await contextFor(browser, server.origin, viewer, { colorScheme });
		const page = await context.newPage();
		const problems: string[] = [];
		page.on('pageerror', (problem) => problems.push(String(problem)));
		page.on('console', (message) => {
			if (message.type() === 'error') problems.push(message.text());
		});
		const path = route
			.replaceAll(/\/\([a-z]+\)/g, '')
			.replaceAll(/\[+(\w+)\]+/g, (_, name: string) => row.params?.(scene)[name] ?? '');
		await page.goto(path, { waitUntil: 'networkidle' });
		const { violations } = await new AxeBuilder({ page })
			.withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'])
			.analyze();
		await context.close();
		expect(
			violations.map(({ id, nodes }) => ({
				id,
				at: nodes.slice(0, 3).map((node) => `${node.target.join(' ')} ${node.failureSummary ?? ''}`)
			}))
		).toEqual([]);
		expect(problems).toEqual([]);
	});
});
