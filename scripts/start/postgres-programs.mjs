import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { StartProblem } from './problem.mjs';
import { isRoot, mayAdminister, run, runAsRoot } from './run.mjs';

const oldestMajor = 15;
const debianFolder = '/usr/lib/postgresql';
const clusterSettings = '/etc/postgresql-common/createcluster.conf';

/**
 * The newest PostgreSQL of version 15 or later with server programs: Debian's folders first, then PATH.
 * @returns {Promise<{ programs: string, major: number } | undefined>} folder of the programs
 */
export async function findPostgres() {
	/** @type {string[]} */
	const folders = [];
	if (existsSync(debianFolder)) {
		const majors = readdirSync(debianFolder).sort((a, b) => Number(b) - Number(a));
		for (const major of majors) folders.push(join(debianFolder, major, 'bin'));
	}
	folders.push(...(process.env.PATH ?? '').split(':').filter(Boolean));
	for (const programs of folders) {
		if (!['initdb', 'pg_ctl', 'postgres'].every((name) => existsSync(join(programs, name)))) continue;
		const { output } = await run(join(programs, 'postgres'), ['--version'], { cwd: '/' });
		const major = Number(/\(PostgreSQL\) (\d+)/.exec(output)?.[1]);
		if (major >= oldestMajor) return { programs, major };
	}
	return undefined;
}

/** What a person without the right to install runs to get PostgreSQL. */
export const installCommand = [
	'sudo mkdir -p /etc/postgresql-common',
	`echo 'create_main_cluster = false' | sudo tee -a ${clusterSettings}`,
	'sudo apt-get update',
	'sudo apt-get install -y --no-install-recommends postgresql postgresql-contrib'
].join(' && ');

/**
 * Installs Debian's PostgreSQL, without the cluster its package would start on its own.
 * @param {(line: string) => void} say
 */
export async function installPostgres(say) {
	const refuse = (/** @type {string} */ why) =>
		new StartProblem(
			`PostgreSQL ${oldestMajor} or later is needed and ${why}. Run this, then start again:\n\n  ${installCommand}\n`
		);
	if (!existsSync('/usr/bin/apt-get')) {
		throw new StartProblem(
			`PostgreSQL ${oldestMajor} or later is needed and was not found. Install it so that initdb, pg_ctl and postgres are on PATH, or set DATABASE_URL.`
		);
	}
	if (!(await mayAdminister())) throw refuse('was not found');
	const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
	const noCluster = `mkdir -p /etc/postgresql-common && { grep -qs '^create_main_cluster' ${clusterSettings} || echo 'create_main_cluster = false' >> ${clusterSettings}; }`;
	const steps = /** @type {const} */ ([
		['not keeping a cluster of its own', 'sh', ['-c', noCluster]],
		['reading the package lists', 'apt-get', ['update']],
		[
			'installing postgresql',
			'apt-get',
			[
				'install',
				'-y',
				'--no-install-recommends',
				'-o',
				'Dpkg::Options::=--force-confold',
				'postgresql',
				'postgresql-contrib'
			]
		]
	]);
	for (const [what, command, args] of steps) {
		say(what);
		const { code, output } = await runAsRoot(command, [...args], { env });
		if (code !== 0) throw refuse(`${command} could not install it (${output.trim().split('\n').at(-1)})`);
	}
	const found = await findPostgres();
	if (!found) throw refuse('the installed one is older');
	return found;
}

/** Commands of the cluster never run as root: as `postgres` when we are root, else as ourselves. */
export function asDatabasePerson() {
	/** @param {string} command @param {string[]} args @param {Parameters<typeof run>[2]} [options] */
	return (command, args, options = {}) =>
		isRoot()
			? run('runuser', ['-u', 'postgres', '--', command, ...args], { cwd: '/', ...options })
			: run(command, args, { cwd: '/', ...options });
}
