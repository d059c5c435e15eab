import { createHash, randomUUID } from 'node:crypto';
import { link, mkdir, open, readdir, rename, rm } from 'node:fs/promises';
import { dirname, join } from 'node:path';

// One file for an object: its bytes, then a description as JSON, then the description's length. Renaming it into place makes
// bytes and description appear together or not at all.

const trailerLength = 8;
const mark = 'MNS1';
const incoming = '.incoming';
const readBytes = 256 * 1024;

/**
 * @typedef {object} Described
 * @property {string} key
 * @property {number} size bytes
 * @property {string} etag MD5 in hexadecimal, as S3 has it
 * @property {string} modified ISO time
 * @property {Record<string, string>} headers content-type and the like, x-amz-meta-…
 */

/** @param {string} folder */
async function makeDurable(folder) {
	const handle = await open(folder, 'r');
	try {
		await handle.sync();
	} finally {
		await handle.close();
	}
}

/** @param {import('node:fs/promises').FileHandle} handle @returns {Promise<Described | undefined>} */
async function readDescription(handle) {
	const { size } = await handle.stat();
	if (size < trailerLength) return undefined;
	const trailer = Buffer.alloc(trailerLength);
	await handle.read(trailer, 0, trailerLength, size - trailerLength);
	const length = trailer.readUInt32BE(0);
	if (trailer.toString('latin1', 4) !== mark || length > size - trailerLength) return undefined;
	const description = Buffer.alloc(length);
	await handle.read(description, 0, length, size - trailerLength - length);
	return JSON.parse(description.toString());
}

/** @param {string} path */
async function describeFile(path) {
	const handle = await open(path, 'r');
	try {
		return await readDescription(handle);
	} finally {
		await handle.close();
	}
}

/** Buckets and objects under one folder. What {@link Storage.put} and {@link Storage.remove} confirmed survives a crash. */
export class Storage {
	/** @type {Map<string, Map<string, Described>>} */
	#buckets = new Map();

	/** @param {string} folder */
	constructor(folder) {
		this.folder = folder;
	}

	/** Reads what is there and drops what never arrived whole. */
	async open() {
		await mkdir(this.folder, { recursive: true, mode: 0o700 });
		await rm(join(this.folder, incoming), { recursive: true, force: true });
		await mkdir(join(this.folder, incoming));
		for (const bucket of await readdir(this.folder)) {
			if (bucket === incoming) continue;
			const objects = new Map();
			for (const part of await readdir(join(this.folder, bucket))) {
				for (const name of await readdir(join(this.folder, bucket, part))) {
					const described = await describeFile(join(this.folder, bucket, part, name));
					if (described) objects.set(described.key, described);
				}
			}
			this.#buckets.set(bucket, objects);
		}
		return this;
	}

	/** @param {string} bucket @returns {boolean} false when it was there already */
	has(bucket) {
		return this.#buckets.has(bucket);
	}

	/** @param {string} bucket */
	async makeBucket(bucket) {
		await mkdir(join(this.folder, bucket), { recursive: true });
		await makeDurable(this.folder);
		if (!this.#buckets.has(bucket)) this.#buckets.set(bucket, new Map());
	}

	/** @param {string} bucket @param {string} key */
	describe(bucket, key) {
		return this.#buckets.get(bucket)?.get(key);
	}

	/** @param {string} bucket @returns {Described[]} in the order of their keys' bytes, as S3 lists */
	list(bucket) {
		const all = [...(this.#buckets.get(bucket)?.values() ?? [])];
		return all.sort((a, b) => Buffer.compare(Buffer.from(a.key), Buffer.from(b.key)));
	}

	/** @param {string} bucket @param {string} key */
	#path(bucket, key) {
		const name = createHash('sha256').update(key).digest('hex');
		return join(this.folder, bucket, name.slice(0, 2), name);
	}

	/**
	 * @param {string} bucket
	 * @param {string} key
	 * @param {AsyncIterable<Buffer>} body
	 * @param {Record<string, string>} headers
	 * @param {{ check?: (read: { size: number }) => void, onlyIfNew?: boolean }} [options] `check` may throw once all was read: nothing is kept then
	 * @returns {Promise<Described | undefined>} `undefined` when it had to be new and was not
	 */
	async put(bucket, key, body, headers, options = {}) {
		const temporary = join(this.folder, incoming, randomUUID());
		const path = this.#path(bucket, key);
		const handle = await open(temporary, 'wx', 0o600);
		try {
			const md5 = createHash('md5');
			let size = 0;
			for await (const chunk of body) {
				md5.update(chunk);
				size += chunk.length;
				await handle.writeFile(chunk);
			}
			options.check?.({ size });
			const described = { key, size, etag: md5.digest('hex'), modified: new Date().toISOString(), headers };
			const description = Buffer.from(JSON.stringify(described));
			const trailer = Buffer.alloc(trailerLength);
			trailer.writeUInt32BE(description.length, 0);
			trailer.write(mark, 4, 'latin1');
			await handle.writeFile(Buffer.concat([description, trailer]));
			await handle.sync();
			await mkdir(dirname(path), { recursive: true });
			// A link never replaces: of two first writers one loses.
			if (options.onlyIfNew) await link(temporary, path);
			else await rename(temporary, path);
			await makeDurable(dirname(path));
			await makeDurable(join(this.folder, bucket));
			this.#buckets.get(bucket)?.set(key, described);
			return described;
		} catch (problem) {
			if (options.onlyIfNew && /** @type {NodeJS.ErrnoException} */ (problem).code === 'EEXIST')
				return undefined;
			throw problem;
		} finally {
			await handle.close();
			await rm(temporary, { force: true });
		}
	}

	/**
	 * Opens an object as it is now; a later overwrite does not reach the reader. One of `stream` and `close` must be called.
	 * @param {string} bucket
	 * @param {string} key
	 * @returns {Promise<{ described: Described, stream: (range?: { first: number, last: number }) => AsyncIterable<Buffer>, close: () => Promise<void> } | undefined>}
	 *   ranges in bytes, both ends included
	 */
	async openObject(bucket, key) {
		if (!this.#buckets.get(bucket)?.has(key)) return undefined;
		const handle = await open(this.#path(bucket, key), 'r').catch(() => undefined);
		if (!handle) return undefined;
		const described = await readDescription(handle);
		if (!described) throw new Error(`The file of ${bucket}/${key} is damaged.`);
		return {
			described,
			close: () => handle.close(),
			async *stream(range = { first: 0, last: described.size - 1 }) {
				try {
					for (let at = range.first; at <= range.last;) {
						const { bytesRead, buffer } = await handle.read(
							Buffer.alloc(Math.min(readBytes, range.last - at + 1)),
							0,
							undefined,
							at
						);
						if (bytesRead === 0) throw new Error(`The file of ${bucket}/${key} is shorter than described.`);
						at += bytesRead;
						yield buffer.subarray(0, bytesRead);
					}
				} finally {
					await handle.close();
				}
			}
		};
	}

	/** @param {string} bucket @param {string} key */
	async remove(bucket, key) {
		const path = this.#path(bucket, key);
		if (!this.#buckets.get(bucket)?.delete(key)) return;
		await rm(path, { force: true });
		await makeDurable(dirname(path));
	}
}
