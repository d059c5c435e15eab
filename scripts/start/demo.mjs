import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { root } from './folder.mjs';
import { StartProblem } from './problem.mjs';
import { run } from './run.mjs';
import { factsOf, rememberFact } from './setup-facts.mjs';

/**
 * @param {string} ownerUrl
 * @returns {Promise<'loaded' | 'interrupted' | 'absent'>}
 */
export async function demoState(ownerUrl) {
	const { demo } = await factsOf(ownerUrl);
	return demo === undefined ? 'absent' : demo === 'loaded' ? 'loaded' : 'interrupted';
}

/**
 * Loads the demo course, through the application's own verbs, as the application's role.
 * @param {string} ownerUrl
 * @param {NodeJS.ProcessEnv} env all settings
 * @param {(text: string) => void} say
 */
export async function loadDemo(ownerUrl, env, say) {
	await rememberFact(ownerUrl, 'demo', 'loading');
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
	await rememberFact(ownerUrl, 'demo', 'loaded');
}

/** @returns {Promise<{ name: string, email: string, password: string, role: string, why: string }[]>} none when there is no demo */
export async function demoAccounts() {
	if (!existsSync(join(root, 'scripts/demo/accounts.ts'))) return [];
	const { tsImport } = await import('tsx/esm/api');
	const { demoAccounts: accounts } = await tsImport('../demo/accounts.ts', import.meta.url);
	return accounts ?? [];
}

export const hasDemo = () => existsSync(join(root, 'scripts/demo/load.ts'));
