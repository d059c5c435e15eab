import { existsSync } from 'node:fs';
import { join } from 'node:path';
import postgres from 'postgres';
import { root } from './folder.mjs';
import { StartProblem } from './problem.mjs';
import { run } from './run.mjs';

// Whether the demo was loaded is remembered beside what was loaded, so that the two cannot disagree.

/**
 * @param {string} ownerUrl
 * @param {(sql: postgres.Sql) => Promise<Result>} work
 * @returns {Promise<Result>}
 * @template Result
 */
async function asOwner(ownerUrl, work) {
	const sql = postgres(ownerUrl, { max: 1, onnotice: () => undefined });
	try {
		await sql`create schema if not exists setup`;
		await sql`create table if not exists setup.loaded (name text primary key, began timestamptz not null default now(), ended timestamptz)`;
		return await work(sql);
	} finally {
		await sql.end();
	}
}

/**
 * @param {string} ownerUrl
 * @returns {Promise<'loaded' | 'interrupted' | 'absent'>}
 */
export function demoState(ownerUrl) {
	return asOwner(ownerUrl, async (sql) => {
		const [row] = await sql`select ended from setup.loaded where name = 'demo'`;
		return row ? (row.ended ? 'loaded' : 'interrupted') : 'absent';
	});
}

/**
 * Loads the demo course, through the application's own verbs, as the application's role.
 * @param {string} ownerUrl
 * @param {NodeJS.ProcessEnv} env all settings
 * @param {(text: string) => void} say
 */
export async function loadDemo(ownerUrl, env, say) {
	await asOwner(
		ownerUrl,
		(sql) => sql`insert into setup.loaded (name) values ('demo') on conflict do nothing`
	);
	say('loading');
	const { code, output } = await run(
		process.execPath,
		['--import', 'tsx', join(root, 'scripts/start/load-demo.ts')],
		{
			cwd: root,
			env,
			onLine: (line) => say(line.slice(0, 60))
		}
	);
	if (code !== 0) throw new StartProblem(`The demo could not be loaded:\n${output.trim()}`);
	await asOwner(ownerUrl, (sql) => sql`update setup.loaded set ended = now() where name = 'demo'`);
}

/** @returns {Promise<{ name: string, email: string, password: string, role: string, why: string }[]>} none when there is no demo */
export async function demoAccounts() {
	if (!existsSync(join(root, 'scripts/demo/accounts.ts'))) return [];
	const { tsImport } = await import('tsx/esm/api');
	const { demoAccounts: accounts } = await tsImport('../demo/accounts.ts', import.meta.url);
	return accounts ?? [];
}

export const hasDemo = () => existsSync(join(root, 'scripts/demo/load.ts'));
