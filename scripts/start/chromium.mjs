import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { mayAdminister, runAsRoot } from './run.mjs';

const names = ['chromium', 'chromium-browser', 'google-chrome', 'google-chrome-stable'];
const packages = ['chromium', 'fonts-liberation'];

/** What a person without the right to install runs to get the browser. */
export const installCommand = `sudo apt-get update && sudo apt-get install -y --no-install-recommends ${packages.join(' ')}`;

/** @returns {string | undefined} */
export function findChromium() {
	if (process.env.CHROMIUM_PATH) return process.env.CHROMIUM_PATH;
	const folders = (process.env.PATH ?? '').split(':').filter(Boolean);
	return folders
		.flatMap((folder) => names.map((name) => join(folder, name)))
		.find((path) => existsSync(path));
}

/**
 * Debian's Chromium: found, or installed when that is allowed.
 * @param {(text: string) => void} say
 * @returns {Promise<string | undefined>} its path
 */
export async function ensureChromium(say) {
	const found = findChromium();
	if (found || !existsSync('/usr/bin/apt-get') || !(await mayAdminister())) return found;
	say('installing chromium');
	const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
	await runAsRoot('apt-get', ['update'], { env });
	await runAsRoot('apt-get', ['install', '-y', '--no-install-recommends', ...packages], { env });
	return findChromium();
}
