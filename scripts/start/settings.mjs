import { join } from 'node:path';
import { parseEnv } from 'node:util';
import { readIfThere, root } from './folder.mjs';
import { StartProblem } from './problem.mjs';

/**
 * The environment, with what it leaves unset filled from `.env`.
 * @returns {Record<string, string | undefined>}
 */
export function givenSettings() {
	const file = readIfThere(join(root, '.env'));
	const given = { ...(file === undefined ? {} : parseEnv(file)) };
	for (const [name, value] of Object.entries(process.env))
		if (value !== undefined && value !== '') given[name] = value;
	return given;
}

/** Names and fallbacks as .env.example lists them; a test holds it to the settings themselves. */
function listedSettings() {
	const example = readIfThere(join(root, '.env.example')) ?? '';
	return [...example.matchAll(/^#([A-Z0-9_]+)=(.*)$/gm)].map(([, name = '', fallback = '']) => ({
		name,
		fallback
	}));
}

/**
 * Checks what a person set; throws a problem that names each setting and what it should be.
 * @returns {Promise<{ given: Record<string, string | undefined>, parts: string[] }>} `parts`: what is brought from outside
 */
export async function checkedSettings() {
	const given = givenSettings();
	const listed = listedSettings();
	// With nothing set there is nothing to check, and loading what checks takes a second start's time.
	if (listed.length === 0 || listed.some(({ name }) => given[name])) {
		const { tsImport } = await import('tsx/esm/api');
		const { complaintsAbout } = await tsImport('../../src/lib/server/env.ts', import.meta.url);
		/** @type {string[]} */
		const complaints = complaintsAbout(given);
		if (complaints.length > 0) throw new StartProblem(complaints.join('\n'));
	}
	for (const { name, fallback } of listed) if (fallback) given[name] ||= fallback;
	const outside = {
		DATABASE_URL: 'database',
		S3_ENDPOINT: 'object store',
		SMTP_URL: 'mail',
		REDIS_URL: 'Redis'
	};
	const parts = Object.entries(outside).flatMap(([name, what]) => (given[name] ? [what] : []));
	return { given, parts };
}
