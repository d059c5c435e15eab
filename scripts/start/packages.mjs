import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { kept, readIfThere, root, sha256, writeWhole } from './folder.mjs';
import { whileLocked } from './lock.mjs';
import { StartProblem } from './problem.mjs';
import { run } from './run.mjs';

/** Says why this Node.js cannot be used; nothing when it can. */
export function checkNode() {
	const [major = 0, minor = 0] = process.versions.node.split('.').map(Number);
	const fits = (major === 20 && minor >= 19) || major >= 22;
	if (!fits)
		throw new StartProblem(
			`Node.js ${process.versions.node} is running; 20.19 or later of 20, or 22 and later, is needed.`
		);
	return process.versions.node;
}

/** @param {string} text @returns {Record<string, { version?: string, resolved?: string, optional?: boolean, devOptional?: boolean, link?: boolean }>} */
function packagesOf(text) {
	try {
		return JSON.parse(text).packages ?? {};
	} catch {
		return {};
	}
}

/**
 * Whether what npm installed is what the lock file says. npm writes its own list after everything else is in place.
 * @param {string} lockText
 * @param {string | undefined} installedText npm's list inside node_modules
 */
export function isInstalled(lockText, installedText) {
	if (installedText === undefined) return false;
	const installed = packagesOf(installedText);
	const wanted = packagesOf(lockText);
	for (const [place, entry] of Object.entries(wanted)) {
		// Optional ones are for other systems.
		if (place === '' || entry.optional || entry.devOptional) continue;
		if (installed[place]?.version !== entry.version) return false;
	}
	return Object.keys(installed).every((place) => wanted[place] !== undefined);
}

/**
 * Installs the packages of the lock file unless they are there.
 * @param {(text: string) => void} say
 * @returns {Promise<string>} what was done
 */
export async function ensurePackages(say) {
	return whileLocked(
		kept('packages.lock'),
		() => install(say),
		() => say('waiting for another installation')
	);
}

/** @param {(text: string) => void} say */
async function install(say) {
	const lockText = readFileSync(join(root, 'package-lock.json'), 'utf8');
	// Mended packages are part of what has to be there: changed mends are made without installing again.
	const mends = join(root, 'scripts/mend-packages.mjs');
	const hash = sha256(`${lockText}${readFileSync(mends, 'utf8')}${process.version}${process.arch}`);
	const record = kept('packages.hash');
	const installed = readIfThere(join(root, 'node_modules/.package-lock.json'));
	if (installed !== undefined && readIfThere(record) === hash) return 'up to date';
	if (isInstalled(lockText, installed)) {
		const { code, output } = await run(process.execPath, [mends], { cwd: root });
		if (code !== 0) throw new StartProblem(`The packages could not be mended:\n${output.trim()}`);
		writeWhole(record, hash, 0o644);
		return 'up to date';
	}
	say(installed === undefined ? 'installing, about a minute' : 'changed, installing again');
	// npm names its own program when it runs us; a plain `node scripts/start.mjs` finds it on PATH.
	const npm = process.env.npm_execpath;
	const own = npm && /npm-cli\.[cm]?js$/.test(npm);
	const args = ['ci', '--no-audit', '--no-fund', '--include=dev', '--loglevel=error'];
	const env = { ...process.env, NODE_ENV: 'development' };
	const { code, output } = own
		? await run(process.execPath, [npm, ...args], { cwd: root, env })
		: await run('npm', args, { cwd: root, env });
	if (code !== 0) throw new StartProblem(`The packages could not be installed. npm said:\n${output.trim()}`);
	writeWhole(record, hash, 0o644);
	const count = Object.keys(
		packagesOf(readFileSync(join(root, 'node_modules/.package-lock.json'), 'utf8'))
	).length;
	return `${count} installed`;
}
