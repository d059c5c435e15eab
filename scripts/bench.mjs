import { spawn } from 'node:child_process';
import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { root } from './start/folder.mjs';
import { ensurePackages } from './start/packages.mjs';

// `npm run bench -- pages`: runs tests/bench/pages.ts. What the browser and the server compute is measured as they run it: built.

const folder = join(root, 'tests/bench');
const parts = existsSync(folder)
	? readdirSync(folder)
			.filter((name) => name.endsWith('.ts'))
			.map((name) => name.slice(0, -3))
	: [];
const [part, ...rest] = process.argv.slice(2);
if (!part || !parts.includes(part)) {
	console.error(`Name what to measure: ${parts.join(', ') || 'there is nothing yet'}.`);
	process.exit(1);
}
await ensurePackages((text) => console.log(`packages: ${text}`));
const child = spawn(process.execPath, await program(), {
	cwd: root,
	stdio: 'inherit'
});
async function program() {
	const file = join(folder, `${part}.ts`);
	if (part !== 'core') return ['--import', 'tsx', file, ...rest];
	const { build } = await import('vite');
	const outDir = join(root, 'node_modules/.cache/meniscus-bench');
	await build({
		root,
		configFile: false,
		logLevel: 'warn',
		resolve: { alias: { $lib: join(root, 'src/lib') } },
		build: {
			ssr: file,
			outDir,
			emptyOutDir: true,
			minify: false,
			rollupOptions: { output: { entryFileNames: 'core.js' } }
		}
	});
	return ['--expose-gc', join(outDir, 'core.js'), ...rest];
}
for (const signal of /** @type {const} */ (['SIGINT', 'SIGTERM']))
	process.on(signal, () => child.kill(signal));
child.once('exit', (code) => process.exit(code ?? 1));
