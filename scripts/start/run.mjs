import { spawn } from 'node:child_process';

/**
 * Runs a command to its end.
 * @param {string} command
 * @param {string[]} args
 * @param {{ cwd?: string, env?: NodeJS.ProcessEnv, input?: string, onLine?: (line: string) => void, show?: boolean, signal?: AbortSignal }} [options]
 *   `show` passes the output through to the terminal, `onLine` reports it line by line.
 * @returns {Promise<{ code: number, output: string }>} exit status (128 and more for a signal) and both streams joined
 */
export function run(command, args, options = {}) {
	return new Promise((resolve) => {
		const child = spawn(command, args, {
			cwd: options.cwd,
			env: options.env ?? process.env,
			signal: options.signal,
			stdio: [
				options.input === undefined ? 'ignore' : 'pipe',
				options.show ? 'inherit' : 'pipe',
				options.show ? 'inherit' : 'pipe'
			]
		});
		let output = '';
		const collect = (/** @type {Buffer} */ chunk) => {
			const text = chunk.toString();
			output += text;
			if (options.onLine) for (const line of text.split('\n')) if (line.trim()) options.onLine(line.trim());
		};
		child.stdout?.on('data', collect);
		child.stderr?.on('data', collect);
		child.once('error', (problem) => resolve({ code: 127, output: `${output}${problem.message}\n` }));
		child.once('close', (code, signal) => resolve({ code: code ?? (signal ? 130 : 1), output }));
		if (options.input !== undefined) child.stdin?.end(options.input);
	});
}

export const isRoot = () => process.getuid?.() === 0;

/** Whether commands can be run as root: directly, or through sudo without a password. */
export async function mayAdminister() {
	return isRoot() || (await run('sudo', ['-n', 'true'])).code === 0;
}

/** @param {string} command @param {string[]} args @param {Parameters<typeof run>[2]} [options] */
export function runAsRoot(command, args, options) {
	return isRoot() ? run(command, args, options) : run('sudo', ['-n', command, ...args], options);
}
