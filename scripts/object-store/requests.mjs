import { pipeline } from 'node:stream/promises';
import { answerXml, StoreProblem } from './answers.mjs';
import { bodyOf } from './body.mjs';
import { listing } from './listing.mjs';

const keptHeaders = [
	'content-type',
	'content-disposition',
	'content-encoding',
	'content-language',
	'cache-control',
	'expires'
];

/**
 * @typedef {object} Call
 * @property {import('./storage.mjs').Storage} storage
 * @property {import('node:http').IncomingMessage} request
 * @property {import('node:http').ServerResponse} response
 * @property {string} bucket
 * @property {string} key empty for the bucket itself
 * @property {URLSearchParams} query
 * @property {string} payload
 */

/** @param {import('node:http').IncomingMessage} request */
function headersToKeep(request) {
	/** @type {Record<string, string>} */
	const kept = {};
	for (const [name, value] of Object.entries(request.headers)) {
		if (typeof value !== 'string' || !(keptHeaders.includes(name) || name.startsWith('x-amz-meta-')))
			continue;
		const rest = name === 'content-encoding' ? value.replace(/\s*aws-chunked\s*,?\s*/, '') : value;
		if (rest) kept[name] = rest;
	}
	return kept;
}

/** @param {Call} call @param {string} [bucket] @param {string} [key] */
async function found({ storage, ...call }, bucket = call.bucket, key = call.key) {
	const object = await storage.openObject(bucket, key);
	if (!object) throw new StoreProblem(404, 'NoSuchKey', 'There is no such object.');
	return object;
}

/** @param {Call} call */
async function putObject(call) {
	const { storage, request, response, bucket, key, payload } = call;
	if (Buffer.byteLength(key) > 1024)
		throw new StoreProblem(400, 'KeyTooLongError', 'A key holds at most 1024 bytes.');
	const source = request.headers['x-amz-copy-source'];
	const onlyIfNew = request.headers['if-none-match'] === '*';
	if (typeof source === 'string') return copyObject(call, source, onlyIfNew);
	const { body, check } = bodyOf(request, payload);
	const described = await storage.put(bucket, key, body, headersToKeep(request), { check, onlyIfNew });
	if (!described) throw new StoreProblem(412, 'PreconditionFailed', 'The object is there already.');
	response.writeHead(200, { etag: `"${described.etag}"`, 'content-length': 0 }).end();
}

/** @param {Call} call @param {string} source @param {boolean} onlyIfNew */
async function copyObject(call, source, onlyIfNew) {
	const { storage, request, response, bucket, key } = call;
	const [fromBucket = '', ...rest] = decodeURIComponent(source.replace(/^\//, '')).split('/');
	const original = await found(call, fromBucket, rest.join('/'));
	const replaced = request.headers['x-amz-metadata-directive'] === 'REPLACE';
	const headers = replaced ? headersToKeep(request) : original.described.headers;
	const copy = await storage.put(bucket, key, original.stream(), headers, { onlyIfNew });
	if (!copy) throw new StoreProblem(412, 'PreconditionFailed', 'The object is there already.');
	answerXml(response, 200, 'CopyObjectResult', { LastModified: copy.modified, ETag: `"${copy.etag}"` });
}

/**
 * @param {string | undefined} header
 * @param {number} size
 * @returns {{ first: number, last: number } | undefined} `undefined`: the whole
 */
function rangeOf(header, size) {
	const parts = /^bytes=(\d*)-(\d*)$/.exec(header ?? '');
	if (!parts || (!parts[1] && !parts[2])) return undefined;
	const first = parts[1] ? Number(parts[1]) : Math.max(0, size - Number(parts[2]));
	const last = parts[1] && parts[2] ? Math.min(Number(parts[2]), size - 1) : size - 1;
	if (first > last) throw new StoreProblem(416, 'InvalidRange', 'The range lies outside the object.');
	return { first, last };
}

/** @param {Call} call */
async function getObject(call) {
	const { request, response, query } = call;
	const { described, stream, close } = await found(call);
	let sent = false;
	try {
		const etag = `"${described.etag}"`;
		if (request.headers['if-none-match'] === etag) return void response.writeHead(304, { etag }).end();
		const range = rangeOf(request.headers.range, described.size);
		/** @type {Record<string, string | number>} */
		const headers = {
			'content-type': 'binary/octet-stream',
			...described.headers,
			etag,
			'last-modified': new Date(described.modified).toUTCString(),
			'accept-ranges': 'bytes',
			'content-length': range ? range.last - range.first + 1 : described.size
		};
		if (range) headers['content-range'] = `bytes ${range.first}-${range.last}/${described.size}`;
		for (const name of keptHeaders) {
			const wanted = query.get(`response-${name}`);
			if (wanted !== null) headers[name] = wanted;
		}
		response.writeHead(range ? 206 : 200, headers);
		if (request.method === 'HEAD') return void response.end();
		sent = true;
		await pipeline(stream(range), response);
	} finally {
		if (!sent) await close();
	}
}

/** @param {Call} call */
export async function answer(call) {
	const { storage, request, response, bucket, key, query } = call;
	const method = request.method ?? '';
	if (!/^[a-z0-9][a-z0-9.-]{1,61}[a-z0-9]$/.test(bucket)) {
		throw new StoreProblem(
			400,
			'InvalidBucketName',
			'A bucket has 3 to 63 small letters, digits, dots and hyphens.'
		);
	}
	if (key === '' && method === 'PUT') {
		if (storage.has(bucket))
			throw new StoreProblem(409, 'BucketAlreadyOwnedByYou', 'The bucket is there already.');
		await storage.makeBucket(bucket);
		return void response.writeHead(200, { location: `/${bucket}`, 'content-length': 0 }).end();
	}
	if (!storage.has(bucket)) throw new StoreProblem(404, 'NoSuchBucket', 'There is no such bucket.');
	if (key === '') {
		if (method === 'HEAD') return void response.writeHead(200).end();
		if (method === 'GET' && query.get('list-type') === '2') {
			return answerXml(response, 200, 'ListBucketResult', listing(storage.list(bucket), bucket, query));
		}
	} else {
		if (method === 'PUT') return putObject(call);
		if (method === 'GET' || method === 'HEAD') return getObject(call);
		if (method === 'DELETE') {
			await storage.remove(bucket, key);
			return void response.writeHead(204).end();
		}
	}
	throw new StoreProblem(501, 'NotImplemented', 'This store does not do that.');
}
