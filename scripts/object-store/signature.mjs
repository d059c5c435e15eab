import { createHash, createHmac, timingSafeEqual } from 'node:crypto';
import { StoreProblem } from './answers.mjs';

// Signature version 4 as Amazon documents it ("Authenticating Requests (AWS Signature Version 4)", S3 API reference).

const algorithm = 'AWS4-HMAC-SHA256';
const allowedSkewMinutes = 15;
const longestExpirySeconds = 7 * 24 * 3600;

/** @param {string} text percent-encoded as the signature wants it: everything but A-Z a-z 0-9 - . _ ~ */
export const encode = (text) =>
	encodeURIComponent(text).replace(
		/[!'()*]/g,
		(character) => `%${character.charCodeAt(0).toString(16).toUpperCase()}`
	);

/** @param {string | Buffer} key @param {string} text */
const hmac = (key, text) => createHmac('sha256', key).update(text).digest();

/** @param {string} stamp 20261201T101500Z @returns {number} milliseconds, NaN when malformed */
function instant(stamp) {
	const parts = /^(\d{4})(\d\d)(\d\d)T(\d\d)(\d\d)(\d\d)Z$/.exec(stamp);
	if (!parts) return Number.NaN;
	const [year = 0, month = 0, day = 0, hour = 0, minute = 0, second = 0] = parts.slice(1).map(Number);
	return Date.UTC(year, month - 1, day, hour, minute, second);
}

/**
 * @typedef {object} SignedRequest
 * @property {string} method
 * @property {string} url path and query as sent
 * @property {Record<string, string | string[] | undefined>} headers names in small letters
 *
 * @typedef {object} Keys
 * @property {string} keyId
 * @property {string} key
 * @property {string} region
 */

/**
 * The signature a request should carry.
 * @param {SignedRequest} request
 * @param {{ key: string, stamp: string, scope: string, signedHeaders: string[], payload: string }} how
 */
export function signatureOf(request, { key, stamp, scope, signedHeaders, payload }) {
	const [path = '/', query = ''] = request.url.split(/\?(.*)/s);
	const canonicalPath = path
		.split('/')
		.map((segment) => encode(decodeURIComponent(segment)))
		.join('/');
	const canonicalQuery = [...new URLSearchParams(query.replaceAll('+', '%2B'))]
		.filter(([name]) => name !== 'X-Amz-Signature')
		.map(([name, value]) => [encode(name), encode(value)])
		.sort(([a = '', x = ''], [b = '', y = '']) => (a < b ? -1 : a > b ? 1 : x < y ? -1 : x > y ? 1 : 0))
		.map(([name, value]) => `${name}=${value}`)
		.join('&');
	const canonicalHeaders = signedHeaders.map((name) => {
		const value = request.headers[name];
		return `${name}:${(Array.isArray(value) ? value.join(',') : (value ?? '')).trim().replace(/ +/g, ' ')}\n`;
	});
	const canonical = [
		...[request.method, canonicalPath, canonicalQuery],
		...[canonicalHeaders.join(''), signedHeaders.join(';'), payload]
	].join('\n');
	const toSign = [algorithm, stamp, scope, createHash('sha256').update(canonical).digest('hex')].join('\n');
	const signingKey = scope
		.split('/')
		.reduce((/** @type {string | Buffer} */ sofar, part) => hmac(sofar, part), `AWS4${key}`);
	return createHmac('sha256', signingKey).update(toSign).digest('hex');
}

const denied = (/** @type {string} */ message) => new StoreProblem(403, 'AccessDenied', message);

/** @param {SignedRequest} request @param {URLSearchParams} query */
function claims(request, query) {
	if (query.has('X-Amz-Signature')) {
		const expires = Number(query.get('X-Amz-Expires'));
		if (query.get('X-Amz-Algorithm') !== algorithm) throw denied('Unknown signing algorithm.');
		if (!Number.isInteger(expires) || expires < 1 || expires > longestExpirySeconds) {
			throw new StoreProblem(
				400,
				'AuthorizationQueryParametersError',
				'X-Amz-Expires should be 1 to 604800 seconds.'
			);
		}
		return {
			credential: query.get('X-Amz-Credential') ?? '',
			signedHeaders: (query.get('X-Amz-SignedHeaders') ?? '').split(';'),
			signature: query.get('X-Amz-Signature') ?? '',
			stamp: query.get('X-Amz-Date') ?? '',
			payload: query.get('X-Amz-Content-Sha256') ?? 'UNSIGNED-PAYLOAD',
			expires
		};
	}
	const header = String(request.headers['authorization'] ?? '');
	if (!header.startsWith(`${algorithm} `)) throw denied('The request is not signed.');
	const fields = new Map(
		header
			.slice(algorithm.length)
			.split(',')
			.map((field) => /** @type {[string, string]} */ (field.trim().split(/=(.*)/s).slice(0, 2)))
	);
	return {
		credential: fields.get('Credential') ?? '',
		signedHeaders: (fields.get('SignedHeaders') ?? '').split(';'),
		signature: fields.get('Signature') ?? '',
		stamp: String(request.headers['x-amz-date'] ?? ''),
		payload: String(request.headers['x-amz-content-sha256'] ?? ''),
		expires: undefined
	};
}

/**
 * Lets a request through or throws. Returns what it says of its body: a SHA-256, or that it is unsigned.
 * @param {SignedRequest} request
 * @param {Keys} keys
 * @param {number} now milliseconds
 * @returns {string}
 */
export function verify(request, keys, now) {
	const query = new URLSearchParams((request.url.split(/\?(.*)/s)[1] ?? '').replaceAll('+', '%2B'));
	const { credential, signedHeaders, signature, stamp, payload, expires } = claims(request, query);
	const [keyId, ...scopeParts] = credential.split('/');
	const at = instant(stamp);
	if (keyId !== keys.keyId) throw new StoreProblem(403, 'InvalidAccessKeyId', 'The access key is unknown.');
	if (scopeParts.join('/') !== `${stamp.slice(0, 8)}/${keys.region}/s3/aws4_request`) {
		throw denied(`The credential's scope should be its date, ${keys.region}, s3 and aws4_request.`);
	}
	if (Number.isNaN(at)) throw denied('The date is missing or malformed.');
	if (at - now > allowedSkewMinutes * 60_000)
		throw new StoreProblem(403, 'RequestTimeTooSkewed', 'Signed in the future.');
	if (expires !== undefined) {
		if (now > at + expires * 1000) throw denied('Request has expired');
	} else if (now - at > allowedSkewMinutes * 60_000) {
		throw new StoreProblem(
			403,
			'RequestTimeTooSkewed',
			`Signed more than ${allowedSkewMinutes} minutes ago.`
		);
	}
	// A header that steers the store but is not signed could have been added on the way.
	const unsigned = Object.keys(request.headers).filter(
		(name) => (name === 'host' || name.startsWith('x-amz-')) && !signedHeaders.includes(name)
	);
	if (!signedHeaders.includes('host') || unsigned.length > 0) {
		throw denied(
			`Not signed: ${['host', ...unsigned].filter((name) => !signedHeaders.includes(name)).join(', ')}.`
		);
	}
	const expected = Buffer.from(
		signatureOf(request, { key: keys.key, stamp, scope: scopeParts.join('/'), signedHeaders, payload })
	);
	const given = Buffer.from(signature);
	if (given.length !== expected.length || !timingSafeEqual(given, expected)) {
		throw new StoreProblem(403, 'SignatureDoesNotMatch', 'The signature is not the one these keys give.');
	}
	return payload;
}
