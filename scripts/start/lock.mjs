import { randomBytes } from 'node:crypto';
import { linkSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { readIfThere, writeWhole } from './folder.mjs';
import { isAlive, startedAt } from './processes.mjs';

/**
 * @typedef {object} Holder
 * @property {number} pid
 * @property {string} [started] tells the process from a later one with the same number
 * @property {string} [address] where it serves, once it does
 *
 * @typedef {object} Lock
 * @property {(address: string) => void} tell
 * @property {() => void} release
 */

/** @param {string} path @returns {Holder | undefined} */
function holderOf(path) {
	const text = readIfThere(path);
	if (text === undefined) return undefined;
	try {
		return JSON.parse(text);
	} catch {
		return { pid: 0 };
	}
}

/** @param {Holder} holder */
const lives = (holder) => holder.pid > 0 && isAlive(holder.pid) && startedAt(holder.pid) === holder.started;

/**
 * Takes a lock that lasts as long as the process; one left by a killed process is taken over.
 * @param {string} path
 * @returns {{ lock: Lock } | { holder: Holder }} who has it, when it is not free
 */
export function takeLock(path) {
	const own = { pid: process.pid, started: startedAt(process.pid) };
	const mine = `${path}.${process.pid}.${randomBytes(4).toString('hex')}`;
	writeFileSync(mine, JSON.stringify(own), { mode: 0o644 });
	try {
		for (;;) {
			try {
				linkSync(mine, path);
				break;
			} catch (problem) {
				if (/** @type {NodeJS.ErrnoException} */ (problem).code !== 'EEXIST') throw problem;
			}
			const holder = holderOf(path);
			if (holder && lives(holder)) return { holder };
			if (holder) removeStale(path, holder);
		}
	} finally {
		rmSync(mine, { force: true });
	}
	return {
		lock: {
			tell: (address) => writeWhole(path, JSON.stringify({ ...own, address }), 0o644),
			release: () => {
				if (holderOf(path)?.pid === process.pid) rmSync(path, { force: true });
			}
		}
	};
}

/** @param {string} path @param {Holder} stale */
function removeStale(path, stale) {
	const aside = `${path}.stale.${process.pid}`;
	try {
		renameSync(path, aside);
	} catch {
		return;
	}
	const moved = holderOf(aside);
	// Another process may have taken over between the look and the move: its lock goes back.
	if (moved && (moved.pid !== stale.pid || moved.started !== stale.started)) {
		try {
			linkSync(aside, path);
		} catch {
			// Someone else has it by now.
		}
	}
	rmSync(aside, { force: true });
}

/**
 * Runs `work` while no other process runs its own under the same lock.
 * @template Result
 * @param {string} path
 * @param {() => Promise<Result>} work
 * @param {(holder: Holder) => void} [onWait]
 * @returns {Promise<Result>}
 */
export async function whileLocked(path, work, onWait) {
	let told = false;
	for (;;) {
		const taken = takeLock(path);
		if ('lock' in taken) {
			try {
				return await work();
			} finally {
				taken.lock.release();
			}
		}
		if (!told) onWait?.(taken.holder);
		told = true;
		await new Promise((resolve) => setTimeout(resolve, 250));
	}
}
