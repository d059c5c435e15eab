import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { root, sha256 } from './folder.mjs';
import { StartProblem } from './problem.mjs';
import { factsOf, rememberFact } from './setup-facts.mjs';

const sources = ['src/lib/server/db/migrate.ts', 'src/lib/server/db/grants.ts', 'package-lock.json'];

/** A hash of everything that decides what a migration run does. */
function migrationsHash() {
	const migrations = readdirSync(join(root, 'drizzle'))
		.filter((name) => name.endsWith('.sql'))
		.sort()
		.map((name) => `drizzle/${name}`);
	return sha256(
		[...migrations, ...sources].map((name) => `${name} ${sha256(readFileSync(join(root, name)))}`).join('\n')
	);
}

/**
 * The same for the private cluster, whose durability we set ourselves: nothing is loaded or run when the database says that
 * these very migrations were applied.
 * @param {string} ownerUrl
 * @param {string} applicationUrl
 * @returns {Promise<number>} how many migrations were applied
 */
export async function bringLocalUpToDate(ownerUrl, applicationUrl) {
	const hash = migrationsHash();
	if ((await factsOf(ownerUrl)).migrations === hash) return 0;
	const applied = await bringUpToDate(ownerUrl, applicationUrl);
	await rememberFact(ownerUrl, 'migrations', hash);
	return applied;
}

/**
 * Brings the database up to date.
 * @param {string} ownerUrl
 * @param {string} applicationUrl
 * @returns {Promise<number>} how many migrations were applied
 */
export async function bringUpToDate(ownerUrl, applicationUrl) {
	const { tsImport } = await import('tsx/esm/api');
	const { migrate } = await tsImport('../../src/lib/server/db/migrate.ts', import.meta.url);
	try {
		const { applied } = await migrate({
			ownerUrl,
			applicationRole: decodeURIComponent(new URL(applicationUrl).username),
			folder: join(root, 'drizzle')
		});
		return applied;
	} catch (problem) {
		const cause = /** @type {{ message?: string, code?: string, cause?: { message?: string } }} */ (problem);
		const unreachable = [
			'ECONNREFUSED',
			'ENOTFOUND',
			'EHOSTUNREACH',
			'CONNECT_TIMEOUT',
			'28P01',
			'3D000',
			'28000'
		];
		const advice = unreachable.includes(cause.code ?? '')
			? ' DATABASE_URL and DATABASE_OWNER_URL should name a database that answers.'
			: '';
		throw new StartProblem(
			`The database could not be brought up to date: ${cause.cause?.message ?? cause.message ?? String(problem)}.${advice}`.replace(
				'..',
				'.'
			)
		);
	}
}
