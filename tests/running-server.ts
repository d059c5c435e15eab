import { fork } from 'node:child_process';
import { join } from 'node:path';
import { ensureBuild } from '../scripts/start/build.mjs';
import { lastingPort, untilFree } from '../scripts/start/ports.mjs';

const root = new URL('..', import.meta.url).pathname;

export interface ServerOptions {
	/** As the application's role, from `freshDatabase()`. */
	databaseUrl: string;
	/** A port it had before, to come back under the same origin. */
	port?: number;
	/** Further settings, by name. */
	env?: Record<string, string>;
}

export interface RunningServer {
	origin: string;
	port: number;
	pid: number;
	/** Everything it wrote so far. */
	output(): string;
	/** SIGTERM, and waits until it has gone. */
	stop(): Promise<void>;
	/** SIGKILL, and waits until it has gone. */
	kill(): Promise<void>;
}

/** The application built from the sources as they are; built when they changed. Takes up to a minute then. */
export async function builtApplication(): Promise<string> {
	const { folder } = await ensureBuild(() => undefined);
	process.env['MENISCUS_BUILD'] = folder;
	return folder;
}

/** Runs the built application as a process of its own on a free port; resolves when it listens. */
export async function startServer(options: ServerOptions): Promise<RunningServer> {
	const build = process.env['MENISCUS_BUILD'] ?? (await builtApplication());
	const port = await (options.port === undefined ? lastingPort() : untilFree(options.port));
	const origin = `http://127.0.0.1:${port}`;
	let output = '';
	const child = fork(join(root, 'scripts/serve.mjs'), [], {
		cwd: root,
		stdio: ['ignore', 'pipe', 'pipe', 'ipc'],
		env: {
			...process.env,
			NODE_ENV: 'production',
			MENISCUS_BUILD: build,
			DATABASE_URL: options.databaseUrl,
			HOST: '127.0.0.1',
			PORT: String(port),
			ORIGIN: origin,
			...options.env
		}
	});
	const collect = (chunk: Buffer) => (output += chunk.toString());
	child.stdout?.on('data', collect);
	child.stderr?.on('data', collect);
	const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
	await new Promise<void>((resolve, reject) => {
		child.once('message', () => resolve());
		child.once('exit', (code) =>
			reject(new Error(`The server ended (${code}) before it listened:\n${output}`))
		);
	});
	const end = (signal: NodeJS.Signals) => async () => {
		if (child.exitCode === null && child.signalCode === null) child.kill(signal);
		await ended;
	};
	return {
		origin,
		port,
		pid: child.pid ?? -1,
		output: () => output,
		stop: end('SIGTERM'),
		kill: end('SIGKILL')
	};
}
