import { randomBytes } from 'node:crypto';
import { join } from 'node:path';
import type { TestProject } from 'vitest/node';
import { startMailCatcher } from '../scripts/mail-catcher.mjs';
import { startObjectStore } from '../scripts/object-store.mjs';
import { findChromium } from '../scripts/start/chromium.mjs';
import { builtApplication } from './running-server';
import { removeFolder, sweep, throwAwayCluster, throwAwayFolder } from '../scripts/throw-away';

/** Starts what server and browser tests need, once, unless the environment already names it. */
export async function setup(project?: Pick<TestProject, 'name'>): Promise<() => Promise<void>> {
	const stops: (() => Promise<void>)[] = [];
	const stopAll = async () => {
		for (const stop of stops.splice(0).reverse()) await stop();
	};
	try {
		if (!process.env['TEST_DATABASE_OWNER_URL']) {
			await sweep();
			const cluster = await throwAwayCluster();
			stops.push(() => cluster.remove());
			set(stops, {
				TEST_DATABASE_OWNER_URL: cluster.ownerUrl(),
				TEST_DATABASE_APPLICATION_URL: cluster.applicationUrl('postgres')
			});
		}
		if (!process.env['S3_ENDPOINT']) {
			const folder = throwAwayFolder();
			const keys = { keyId: 'meniscus-tests', key: randomBytes(12).toString('hex') };
			const store = await startObjectStore({
				folder: join(folder, 'objects'),
				...keys,
				buckets: ['meniscus']
			});
			stops.push(async () => {
				await store.close();
				removeFolder(folder);
			});
			set(stops, {
				S3_ENDPOINT: store.endpoint,
				S3_REGION: 'us-east-1',
				S3_BUCKET: 'meniscus',
				S3_ACCESS_KEY_ID: keys.keyId,
				S3_SECRET_ACCESS_KEY: keys.key
			});
		}
		if (!process.env['MAIL_PAGE_URL']) {
			const folder = throwAwayFolder();
			const catcher = await startMailCatcher({ folder: join(folder, 'mail') });
			stops.push(async () => {
				await catcher.close();
				removeFolder(folder);
			});
			set(stops, {
				SMTP_URL: catcher.smtpUrl,
				MAIL_PAGE_URL: catcher.pageUrl,
				MAIL_FROM: 'Meniscus <meniscus@example.test>'
			});
		}
		if (project?.name === 'browser') {
			// Once for all files, and outside any test's time.
			if (!process.env['MENISCUS_BUILD']) set(stops, { MENISCUS_BUILD: await builtApplication() });
			const chromium = findChromium();
			if (chromium && !process.env['CHROMIUM_PATH']) set(stops, { CHROMIUM_PATH: chromium });
		}
		if (!process.env['ORIGIN']) set(stops, { ORIGIN: 'http://127.0.0.1:4310' });
	} catch (problem) {
		await stopAll();
		throw problem;
	}
	return stopAll;
}

/** Sets variables until teardown, so that a second project's setup in the same process finds the first one's services. */
function set(stops: (() => Promise<void>)[], values: Record<string, string>): void {
	Object.assign(process.env, values);
	stops.push(async () => {
		for (const name of Object.keys(values)) Reflect.deleteProperty(process.env, name);
	});
}
