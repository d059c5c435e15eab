import { readFileSync, readlinkSync } from 'node:fs';

/**
 * When a process began, in clock ticks since boot: together with the number it tells a process from a later one that got
 * the same number. `undefined` when it does not run (or the system has no /proc and cannot tell).
 * @param {number} pid
 * @returns {string | undefined}
 */
export function startedAt(pid) {
	try {
		const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
		// The command name is in brackets and may hold anything; the fields after it are plain.
		const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
		return fields[0] === 'Z' || fields[0] === 'X' ? undefined : fields[19];
	} catch {
		return undefined;
	}
}

/** @param {number} pid */
export function isAlive(pid) {
	if (process.platform === 'linux') return startedAt(pid) !== undefined;
	try {
		process.kill(pid, 0);
		return true;
	} catch (problem) {
		return /** @type {NodeJS.ErrnoException} */ (problem).code === 'EPERM';
	}
}

/**
 * The command line of a process, words separated by spaces; empty when it cannot be read.
 * @param {number} pid
 */
export function commandLine(pid) {
	try {
		return readFileSync(`/proc/${pid}/cmdline`, 'utf8').replaceAll('\0', ' ').trim();
	} catch {
		return '';
	}
}

/** @param {number} pid */
export function workingDirectory(pid) {
	try {
		return readlinkSync(`/proc/${pid}/cwd`);
	} catch {
		return undefined;
	}
}

/**
 * Waits until a process is gone.
 * @param {number} pid
 * @param {number} milliseconds
 * @returns {Promise<boolean>} whether it is
 */
export async function waitForEnd(pid, milliseconds) {
	const until = Date.now() + milliseconds;
	while (isAlive(pid)) {
		if (Date.now() > until) return false;
		await new Promise((resolve) => setTimeout(resolve, 50));
	}
	return true;
}
