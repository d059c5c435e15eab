import { join } from 'node:path';
import { kept, root } from '../start/folder.mjs';
import { run } from '../start/run.mjs';

const bin = (/** @type {string} */ path) => join(root, 'node_modules', path);

/** Each counts as one test. @type {Record<string, string[][]>} commands of Node.js, one after the other */
export const gates = {
	format: [
		[
			bin('prettier/bin/prettier.cjs'),
			'--check',
			'.',
			'--cache',
			'--cache-strategy=content',
			`--cache-location=${kept('prettier.cache')}`
		]
	],
	lint: [
		[
			bin('eslint/bin/eslint.js'),
			'.',
			// No cache: the Svelte configuration holds functions, which ESLint cannot write down.
			'--max-warnings=0'
		]
	],
	types: [
		[bin('@sveltejs/kit/svelte-kit.js'), 'sync'],
		[bin('svelte-check/bin/svelte-check'), '--tsconfig', './tsconfig.json', '--output', 'human']
	],
	boundaries: [[join(root, 'scripts/boundaries.mjs')]],
	migrations: [['--import', 'tsx', join(root, 'scripts/check-migrations.ts')]]
};

/**
 * @param {string} name
 * @param {AbortSignal} signal
 * @returns {Promise<{ name: string, ok: boolean, output: string, seconds: number }>}
 */
export async function runGate(name, signal) {
	const began = performance.now();
	let output = '';
	for (const args of gates[name] ?? []) {
		const result = await run(process.execPath, args, { cwd: root, signal });
		output += result.output;
		if (result.code !== 0) return { name, ok: false, output, seconds: (performance.now() - began) / 1000 };
	}
	return { name, ok: true, output, seconds: (performance.now() - began) / 1000 };
}
