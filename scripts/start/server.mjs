import { fork, spawn } from 'node:child_process';
import { join } from 'node:path';
import { root } from './folder.mjs';
import { nextFreePort } from './ports.mjs';
import { StartProblem } from './problem.mjs';

const graceMilliseconds = 10_000;
const addressInUse = 98;

/**
 * @typedef {object} Served
 * @property {string} address
 * @property {number} port
 * @property {Promise<number>} ended exit status, when it ends
 * @property {() => Promise<void>} stop
 */

/**
 * @param {import('node:child_process').ChildProcess} child
 * @returns {{ ended: Promise<number>, stop: () => Promise<void> }}
 */
function governed(child) {
	/** @type {Promise<number>} */
	const ended = new Promise((resolve) =>
		child.once('exit', (code, signal) => resolve(code ?? (signal ? 1 : 0)))
	);
	return {
		ended,
		async stop() {
			if (child.exitCode !== null || child.signalCode !== null) return;
			child.kill('SIGTERM');
			const timer = setTimeout(() => child.kill('SIGKILL'), graceMilliseconds);
			await ended;
			clearTimeout(timer);
		}
	};
}

/** @param {string} host @param {number} port */
const addressOf = (host, port) => `http://${['0.0.0.0', '::'].includes(host) ? '127.0.0.1' : host}:${port}`;

/**
 * Serves a build on the wanted port or the next free one.
 * @param {{ build: string, env: NodeJS.ProcessEnv, host: string, wantedPort: number }} options
 * @returns {Promise<Served>}
 */
export async function serveBuild({ build, env, host, wantedPort }) {
	for (let first = wantedPort; ;) {
		const port = await nextFreePort(first, host);
		const address = addressOf(host, port);
		const child = fork(join(root, 'scripts/serve.mjs'), [], {
			cwd: root,
			env: {
				...env,
				NODE_ENV: 'production',
				MENISCUS_BUILD: build,
				HOST: host,
				PORT: String(port),
				ORIGIN: env.ORIGIN || address
			},
			stdio: ['ignore', 'inherit', 'pipe', 'ipc']
		});
		let complaint = '';
		child.stderr?.on('data', (/** @type {Buffer} */ chunk) => {
			complaint = (complaint + chunk.toString()).slice(-4000);
			process.stderr.write(chunk);
		});
		const { ended, stop } = governed(child);
		const listening = await Promise.race([
			new Promise((resolve) => child.once('message', () => resolve(true))),
			ended
		]);
		if (listening === true) return { address: env.ORIGIN || address, port, ended, stop };
		// Taken between the look and the attempt.
		if (listening === addressInUse) first = port + 1;
		else
			throw new StartProblem(`The server ended before it listened.${complaint ? ' It said the above.' : ''}`);
	}
}

/**
 * Serves the sources through the development server.
 * @param {{ env: NodeJS.ProcessEnv, host: string, wantedPort: number }} options
 * @returns {Promise<Served>}
 */
export async function serveSources({ env, host, wantedPort }) {
	const port = await nextFreePort(wantedPort, host);
	const address = addressOf(host, port);
	const vite = join(root, 'node_modules/vite/bin/vite.js');
	const child = spawn(
		process.execPath,
		[vite, 'dev', '--host', host, '--port', String(port), '--strictPort'],
		{
			cwd: root,
			env: { ...env, NODE_ENV: 'development', HOST: host, PORT: String(port), ORIGIN: env.ORIGIN || address },
			stdio: ['ignore', 'inherit', 'inherit']
		}
	);
	const { ended, stop } = governed(child);
	for (;;) {
		const answered = await Promise.race([
			fetch(address).then(
				() => true,
				() => false
			),
			ended
		]);
		if (answered === true) return { address, port, ended, stop };
		if (typeof answered === 'number')
			throw new StartProblem('The development server ended before it listened. It said the above.');
		await new Promise((resolve) => setTimeout(resolve, 200));
	}
}
