import { kept, secrets } from './folder.mjs';
import { ports } from './local-database.mjs';
import { freePort } from './ports.mjs';

const bucket = 'meniscus';

/**
 * @returns {Promise<{ settings: Record<string, string>, port: number, close: () => Promise<void> }>}
 */
export async function openLocalStore() {
	const { startObjectStore } = await import('../object-store.mjs');
	const { storeKeyId, storeKey } = secrets(kept('secrets.json'));
	const store = await startObjectStore({
		folder: kept('objects'),
		keyId: storeKeyId,
		key: storeKey,
		port: await freePort(ports.last('objects')),
		buckets: [bucket]
	});
	ports.remember({ objects: store.port });
	return {
		port: store.port,
		close: store.close,
		settings: {
			S3_ENDPOINT: store.endpoint,
			S3_REGION: 'us-east-1',
			S3_BUCKET: bucket,
			S3_ACCESS_KEY_ID: storeKeyId,
			S3_SECRET_ACCESS_KEY: storeKey
		}
	};
}

/**
 * @returns {Promise<{ settings: Record<string, string>, pageUrl: string, close: () => Promise<void> }>}
 */
export async function openLocalMail() {
	const { startMailCatcher } = await import('../mail-catcher.mjs');
	const catcher = await startMailCatcher({
		folder: kept('mail'),
		smtpPort: await freePort(ports.last('smtp')),
		pagePort: await freePort(ports.last('mailPage') ?? 4390)
	});
	ports.remember({ smtp: catcher.smtpPort, mailPage: catcher.pagePort });
	return {
		pageUrl: catcher.pageUrl,
		close: catcher.close,
		settings: { SMTP_URL: catcher.smtpUrl, MAIL_FROM: 'Meniscus <meniscus@localhost.test>' }
	};
}
