import { createHash, randomBytes } from 'node:crypto';
import {
	existsSync,
	mkdirSync,
	readdirSync,
	readFileSync,
	renameSync,
	rmSync,
	statSync,
	utimesSync
} from 'node:fs';
import { basename, join } from 'node:path';
import { kept, root } from './folder.mjs';
import { whileLocked } from './lock.mjs';
import { StartProblem } from './problem.mjs';
import { run } from './run.mjs';

const sources = [
	'src',
	'static',
	'templates',
	'package-lock.json',
	'svelte.config.js',
	'vite.config.ts',
	'tailwind.config.ts',
	'tsconfig.json'
];
const buildsKept = 6;

/** @param {string} path relative to the project @returns {string[]} files in a fixed order */
function filesUnder(path) {
	const full = join(root, path);
	if (!existsSync(full)) return [];
	if (!statSync(full).isDirectory()) return [path];
	return readdirSync(full)
		.sort()
		.flatMap((name) => filesUnder(join(path, name)));
}

/** A hash of everything a build is made from. */
export function sourcesHash() {
	const hash = createHash('sha256').update(`${process.version} ${process.arch}`);
	for (const file of sources.flatMap(filesUnder)) {
		const content = readFileSync(join(root, file));
		hash.update(`${file}\0${content.length}\0`).update(content);
	}
	return hash.digest('hex').slice(0, 20);
}

/** @param {string} builds folder of all builds @param {string} current */
function forgetOld(builds, current) {
	const old = readdirSync(builds)
		.filter((name) => name !== current)
		.map((name) => ({ path: join(builds, name), used: statSync(join(builds, name)).mtimeMs }))
		.sort((a, b) => b.used - a.used)
		.slice(buildsKept - 1);
	for (const { path } of old) rmSync(path, { recursive: true, force: true });
}

/**
 * The application built from the sources as they are: an earlier build when there is one, else a new one. Each set of sources
 * has a folder of its own, so that a server or a test run that uses one is not disturbed by the next.
 * @param {(text: string) => void} say
 * @returns {Promise<{ folder: string, fresh: boolean }>}
 */
export async function ensureBuild(say) {
	return whileLocked(
		kept('build.lock'),
		() => build(say),
		() => say('waiting for another build')
	);
}

/** @param {(text: string) => void} say */
async function build(say) {
	const name = sourcesHash();
	const builds = kept('builds');
	const folder = join(builds, name);
	if (existsSync(join(folder, 'handler.js'))) {
		const now = new Date();
		utimesSync(folder, now, now);
		return { folder, fresh: false };
	}
	say('building, about 15 seconds');
	// We hold the lock: what is half made was left by a killed build.
	for (const left of readdirSync(kept()).filter((entry) => entry.startsWith('making-'))) {
		rmSync(kept(left), { recursive: true, force: true });
	}
	const making = join(kept(), `making-${randomBytes(4).toString('hex')}`);
	const vite = join(root, 'node_modules/vite/bin/vite.js');
	const { code, output } = await run(process.execPath, [vite, 'build', '--logLevel', 'warn'], {
		cwd: root,
		env: { ...process.env, NODE_ENV: 'production', MENISCUS_BUILD_FOLDER: making }
	});
	if (code !== 0 || !existsSync(join(making, 'handler.js'))) {
		rmSync(making, { recursive: true, force: true });
		throw new StartProblem(`The application could not be built:\n${output.trim()}`);
	}
	// Sources that changed in the meantime: a build of neither state must not be taken for one of them later.
	const settled = sourcesHash() === name ? folder : `${folder}-${randomBytes(4).toString('hex')}`;
	rmSync(settled, { recursive: true, force: true });
	mkdirSync(builds, { recursive: true });
	renameSync(making, settled);
	forgetOld(builds, basename(settled));
	return { folder: settled, fresh: true };
}
