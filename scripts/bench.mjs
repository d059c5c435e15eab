import { spawn } from 'node:child_process';
import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { root } from './start/folder.mjs';
import { ensurePackages } from './start/packages.mjs';

// `npm run bench -- pages`: runs tests/bench/pages.ts.

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
const child = spawn(process.execPath, ['--import', 'tsx', join(folder, `${part}.ts`), ...rest], {
	cwd: root,
	stdio: 'inherit'
});
for (const signal of /** @type {const} */ (['SIGINT', 'SIGTERM']))
	process.on(signal, () => child.kill(signal));
child.once('exit', (code) => process.exit(code ?? 1));
