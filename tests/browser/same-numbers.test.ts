import { fileURLToPath } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { build } from 'vite';
import { evaluate, type Readings, type Worksheet } from '$lib/worksheets';
import { exampleOf, experiments } from '../reference/example-readings';
import { worksheetOf } from '../reference/simulated-session';
import { launch } from './chromium';

let browser: Browser;
let page: Page;

const root = fileURLToPath(new URL('../../', import.meta.url));

/** The calculation core as one script, as a page gets it. */
async function script(): Promise<string> {
	const built = await build({
		root,
		configFile: false,
		logLevel: 'warn',
		resolve: { alias: { $lib: `${root}src/lib` } },
		build: {
			write: false,
			lib: { entry: `${root}tests/browser/same-numbers/entry.ts`, formats: ['iife'], name: 'core' }
		}
	});
	const [first] = Array.isArray(built) ? built : [built];
	const chunk = first && 'output' in first ? first.output[0] : undefined;
	if (chunk?.type !== 'chunk') throw new Error('nothing was built');
	return chunk.code;
}

beforeAll(async () => {
	browser = await launch();
	page = await browser.newPage();
	await page.addScriptTag({ content: await script() });
});
afterAll(() => browser?.close());

describe('the same numbers everywhere', () => {
	it.each(experiments)('%s: Chromium gives the bytes that Node gives', async (slug) => {
		const worksheet = worksheetOf(slug);
		const readings = exampleOf(slug, worksheet);
		const inPage = await page.evaluate(
			([sheet, read]) =>
				(globalThis as unknown as { workUp: (worksheet: Worksheet, readings: Readings) => string }).workUp(
					sheet,
					read
				),
			[worksheet, readings] as const
		);
		const here = JSON.stringify(evaluate(worksheet, readings));
		expect(here.length).toBeGreaterThan(5_000);
		expect(inPage === here).toBe(true);
	});
});
