import { createHash, randomBytes } from 'node:crypto';
import { closeSync, fsyncSync, mkdirSync, openSync, readFileSync, renameSync, writeSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

/** The project's top folder. */
export const root = fileURLToPath(new URL('../../', import.meta.url)).replace(/\/$/, '');

/** What the start keeps between runs: cluster, objects, mail, passwords, builds. Not under version control. */
export const keptFolder = join(root, '.meniscus');

/** @param {string[]} parts */
export function kept(...parts) {
	mkdirSync(keptFolder, { recursive: true, mode: 0o755 });
	return join(keptFolder, ...parts);
}

/**
 * Replaces a file so that after a crash either the old or the new content is there, never half of one.
 * @param {string} path
 * @param {string} content
 * @param {number} [mode]
 */
export function writeWhole(path, content, mode = 0o600) {
	mkdirSync(dirname(path), { recursive: true });
	const temporary = `${path}.${process.pid}.${randomBytes(4).toString('hex')}`;
	const file = openSync(temporary, 'wx', mode);
	try {
		writeSync(file, content);
		fsyncSync(file);
	} finally {
		closeSync(file);
	}
	renameSync(temporary, path);
	const folder = openSync(dirname(path), 'r');
	try {
		fsyncSync(folder);
	} finally {
		closeSync(folder);
	}
}

/**
 * @param {string} path
 * @returns {string | undefined} `undefined` when there is no such file
 */
export function readIfThere(path) {
	try {
		return readFileSync(path, 'utf8');
	} catch (problem) {
		if (/** @type {NodeJS.ErrnoException} */ (problem).code === 'ENOENT') return undefined;
		throw problem;
	}
}

/**
 * A small JSON file of strings and numbers; empty when missing or cut short.
 * @param {string} path
 * @returns {Record<string, string | number>}
 */
export function readRecord(path) {
	const text = readIfThere(path);
	if (text === undefined) return {};
	try {
		return JSON.parse(text);
	} catch {
		return {};
	}
}

/** @param {string | Buffer} content */
export const sha256 = (content) => createHash('sha256').update(content).digest('hex');

/**
 * Passwords and keys of the local parts, made once and kept readable for this person only.
 * @param {string} path
 * @returns {{ superuser: string, owner: string, application: string, storeKeyId: string, storeKey: string }}
 */
export function secrets(path) {
	const known = readRecord(path);
	const names = /** @type {const} */ (['superuser', 'owner', 'application', 'storeKeyId', 'storeKey']);
	/** @type {Record<string, string>} */
	const all = {};
	for (const name of names)
		all[name] = String(known[name] ?? randomBytes(name === 'storeKeyId' ? 10 : 24).toString('hex'));
	if (names.some((name) => known[name] !== all[name]))
		writeWhole(path, `${JSON.stringify(all, null, '\t')}\n`);
	return /** @type {ReturnType<typeof secrets>} */ (all);
}
