import { randomBytes } from 'node:crypto';
import { rmSync } from 'node:fs';
import { join } from 'node:path';
import { startMailCatcher } from '../scripts/mail-catcher.mjs';
import { startObjectStore } from '../scripts/object-store.mjs';
import { sweep, throwAwayCluster, throwAwayFolder } from './throw-away';

/** Starts what server and browser tests need, once, unless the environment already names it. */
export async function setup(): Promise<() => Promise<void>> {
	const stops: (() => Promise<void>)[] = [];
	const stopAll = async () => {
		for (const stop of stops.reverse()) await stop();
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
				rmSync(folder, { recursive: true, force: true });
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
				rmSync(folder, { recursive: true, force: true });
			});
			set(stops, {
				SMTP_URL: catcher.smtpUrl,
				MAIL_PAGE_URL: catcher.pageUrl,
				MAIL_FROM: 'Meniscus <meniscus@example.test>'
			});
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
