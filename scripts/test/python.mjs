import { existsSync } from 'node:fs';
import { mayAdminister, run, runAsRoot } from '../start/run.mjs';

const python = '/usr/bin/python3';
const packages = ['python3-mpmath', 'python3-numpy', 'python3-scipy', 'python3-uncertainties'];
const modules = packages.map((name) => name.replace('python3-', '')).join(', ');

/** What a person without the right to install runs to get it. */
export const pythonCommand = `sudo apt-get update && sudo apt-get install -y --no-install-recommends ${packages.join(' ')}`;

const hasModules = async () => (await run(python, ['-c', `import ${modules}`])).code === 0;

/**
 * Debian's Python with what the reference tests ask it: found, or installed when that is allowed.
 * @param {(text: string) => void} say
 * @returns {Promise<boolean>} whether it is there
 */
export async function ensurePython(say) {
	if (existsSync(python) && (await hasModules())) return true;
	if (!existsSync('/usr/bin/apt-get') || !(await mayAdminister())) return false;
	say(`installing ${packages.join(' ')}`);
	const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
	await runAsRoot('apt-get', ['update'], { env });
	await runAsRoot('apt-get', ['install', '-y', '--no-install-recommends', ...packages], { env });
	return hasModules();
}
