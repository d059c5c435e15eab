import { chromium, type Browser, type BrowserContext, type BrowserContextOptions } from 'playwright-core';
import { openSession, type Viewer } from '../../src/lib/server/auth';
import { database } from '../../src/lib/server/db';

/** Debian's Chromium, without what it would ask of the network. */
export function launch(): Promise<Browser> {
	return chromium.launch({
		executablePath: process.env['CHROMIUM_PATH'] ?? '/usr/bin/chromium',
		args: [
			'--no-sandbox',
			'--disable-gpu',
			'--disable-quic',
			'--no-first-run',
			'--disable-background-networking',
			'--disable-component-update',
			'--disable-sync'
		]
	});
}

/** A browser of its own for one person; null is somebody not signed in. */
export async function contextFor(
	browser: Browser,
	origin: string,
	viewer: Viewer | null,
	options: BrowserContextOptions = {}
): Promise<BrowserContext> {
	const context = await browser.newContext({
		viewport: { width: 1440, height: 900 },
		baseURL: origin,
		...options
	});
	if (viewer) {
		const { name, value } = await openSession(database(), viewer.id, 'browser test');
		await context.addCookies([{ name, value, url: origin, httpOnly: true, sameSite: 'Lax' }]);
	}
	return context;
}
