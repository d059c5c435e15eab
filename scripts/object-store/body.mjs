import { createHash } from 'node:crypto';
import { StoreProblem } from './answers.mjs';

const largestObjectBytes = 1024 ** 3;

const polynomial = 0xedb88320;
const crcTable = Uint32Array.from({ length: 256 }, (_, index) => {
	let value = index;
	for (let bit = 0; bit < 8; bit++) value = value & 1 ? (value >>> 1) ^ polynomial : value >>> 1;
	return value >>> 0;
});

/** CRC-32 of ISO 3309, fed piece by piece. */
export class Crc32 {
	#state = 0xffffffff;

	/** @param {Buffer} chunk */
	update(chunk) {
		let state = this.#state;
		for (const byte of chunk) state = (crcTable[(state ^ byte) & 0xff] ?? 0) ^ (state >>> 8);
		this.#state = state >>> 0;
	}

	/** @returns {string} four bytes, base64 */
	digest() {
		const bytes = Buffer.alloc(4);
		bytes.writeUInt32BE((this.#state ^ 0xffffffff) >>> 0, 0);
		return bytes.toString('base64');
	}
}

/**
 * Takes the framing of `aws-chunked` off: hexadecimal length, bytes, …, length 0, trailing headers.
 * @param {AsyncIterable<Buffer>} source
 * @param {(name: string, value: string) => void} onTrailer
 */
async function* unframed(source, onTrailer) {
	let buffered = Buffer.alloc(0);
	let left = 0;
	let state = /** @type {'length' | 'bytes' | 'line end' | 'trailers'} */ ('length');
	for await (const chunk of source) {
		buffered = buffered.length === 0 ? chunk : Buffer.concat([buffered, chunk]);
		for (;;) {
			if (state === 'bytes') {
				if (buffered.length === 0) break;
				const piece = buffered.subarray(0, left);
				buffered = buffered.subarray(piece.length);
				left -= piece.length;
				if (left === 0) state = 'line end';
				yield piece;
				continue;
			}
			const end = buffered.indexOf('\r\n');
			if (end < 0) break;
			const line = buffered.toString('latin1', 0, end);
			buffered = buffered.subarray(end + 2);
			if (state === 'line end') state = 'length';
			else if (state === 'trailers') {
				const [name = '', value = ''] = line.split(/:(.*)/s);
				if (name) onTrailer(name.trim().toLowerCase(), value.trim());
			} else {
				left = Number.parseInt(line.split(';')[0] ?? '', 16);
				if (!Number.isInteger(left) || left < 0)
					throw new StoreProblem(400, 'IncompleteBody', 'The chunks are malformed.');
				state = left === 0 ? 'trailers' : 'bytes';
			}
		}
	}
	if (state !== 'trailers') throw new StoreProblem(400, 'IncompleteBody', 'The body ended early.');
}

/**
 * The object's bytes out of a request, and a check to run when all were read.
 * @param {import('node:http').IncomingMessage} request
 * @param {string} payload what the signature says of the body
 * @returns {{ body: AsyncIterable<Buffer>, check: (read: { size: number }) => void }} `check` throws when bytes and claims differ
 */
export function bodyOf(request, payload) {
	const framed = payload === 'STREAMING-UNSIGNED-PAYLOAD-TRAILER';
	if (payload.startsWith('STREAMING-') && !framed) {
		throw new StoreProblem(501, 'NotImplemented', 'Chunks signed one by one are not read here.');
	}
	const header = (/** @type {string} */ name) => {
		const value = request.headers[name];
		return typeof value === 'string' ? value : undefined;
	};
	/** @type {Record<string, string | undefined>} */
	const claimed = {
		'content-md5': header('content-md5'),
		'x-amz-checksum-sha256': header('x-amz-checksum-sha256'),
		'x-amz-checksum-crc32': header('x-amz-checksum-crc32')
	};
	const announced = Number(header(framed ? 'x-amz-decoded-content-length' : 'content-length') ?? Number.NaN);
	if (announced > largestObjectBytes)
		throw new StoreProblem(400, 'EntityTooLarge', 'An object holds at most 1 GiB here.');
	const sha256 = createHash('sha256');
	const md5 = createHash('md5');
	const crc32 = new Crc32();
	const source = framed ? unframed(request, (name, value) => (claimed[name] = value)) : request;

	async function* counted() {
		let size = 0;
		for await (const chunk of source) {
			size += chunk.length;
			if (size > largestObjectBytes)
				throw new StoreProblem(400, 'EntityTooLarge', 'An object holds at most 1 GiB here.');
			sha256.update(chunk);
			md5.update(chunk);
			crc32.update(chunk);
			yield /** @type {Buffer} */ (chunk);
		}
	}

	/** @param {{ size: number }} read */
	function check({ size }) {
		if (!Number.isNaN(announced) && size !== announced)
			throw new StoreProblem(400, 'IncompleteBody', 'The body ended early.');
		const digest = sha256.digest();
		if (/^[0-9a-f]{64}$/.test(payload) && payload !== digest.toString('hex')) {
			throw new StoreProblem(400, 'XAmzContentSHA256Mismatch', 'The body is not the one that was signed.');
		}
		const found = {
			'content-md5': md5.digest('base64'),
			'x-amz-checksum-sha256': digest.toString('base64'),
			'x-amz-checksum-crc32': crc32.digest()
		};
		for (const [name, value] of Object.entries(found)) {
			if (claimed[name] !== undefined && claimed[name] !== value)
				throw new StoreProblem(400, 'BadDigest', `${name} differs.`);
		}
	}
	return { body: counted(), check };
}
