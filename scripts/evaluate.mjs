import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { tsImport } from 'tsx/esm/api';
import { root } from './start/folder.mjs';

// `npm run -s evaluate`: works readings up from the command line, by the code that pages and server run.

if (!existsSync(join(root, '.svelte-kit/tsconfig.json'))) {
	// names such as $lib are told there; a fresh clone lacks it
	const kit = dirname(createRequire(import.meta.url).resolve('@sveltejs/kit/package.json'));
	const { status } = spawnSync(process.execPath, [join(kit, 'svelte-kit.js'), 'sync'], {
		cwd: root,
		stdio: 'ignore'
	});
	if (status !== 0) {
		console.error('The project is not installed. Run `npm install` first.');
		process.exit(2);
	}
}
const { main } = await tsImport('./evaluate/main.ts', import.meta.url);
process.exitCode = main(
	process.argv.slice(2),
	(text) => process.stdout.write(text),
	(text) => process.stderr.write(text)
);
