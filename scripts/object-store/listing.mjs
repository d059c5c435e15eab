import { StoreProblem } from './answers.mjs';
import { encode } from './signature.mjs';

const largestPage = 1000;

/**
 * ListObjectsV2: one page of keys, with what shares a prefix up to the delimiter rolled into one line.
 * @param {import('./storage.mjs').Described[]} objects in order
 * @param {string} bucket
 * @param {URLSearchParams} query
 * @returns {import('./answers.mjs').Elements}
 */
export function listing(objects, bucket, query) {
	const prefix = query.get('prefix') ?? '';
	const delimiter = query.get('delimiter') ?? '';
	const wanted = Number(query.get('max-keys') ?? largestPage);
	if (!Number.isInteger(wanted) || wanted < 0)
		throw new StoreProblem(400, 'InvalidArgument', 'max-keys should be a count.');
	const limit = Math.min(wanted, largestPage);
	const token = query.get('continuation-token');
	const after = token ? Buffer.from(token, 'base64url').toString() : (query.get('start-after') ?? '');
	const name = query.get('encoding-type') === 'url' ? encode : (/** @type {string} */ text) => text;

	/** @type {import('./answers.mjs').Elements[]} */
	const contents = [];
	/** @type {string[]} */
	const prefixes = [];
	let last = '';
	let truncated = false;
	for (const object of objects) {
		if (!object.key.startsWith(prefix) || Buffer.compare(Buffer.from(object.key), Buffer.from(after)) <= 0)
			continue;
		const end = delimiter ? object.key.indexOf(delimiter, prefix.length) : -1;
		const shared = end < 0 ? undefined : object.key.slice(0, end + delimiter.length);
		if (shared !== undefined && (prefixes.at(-1) === shared || after.startsWith(shared))) {
			last = object.key;
			continue;
		}
		if (contents.length + prefixes.length >= limit) {
			truncated = limit > 0;
			break;
		}
		last = object.key;
		if (shared !== undefined) prefixes.push(shared);
		else {
			contents.push({
				Key: name(object.key),
				LastModified: object.modified,
				ETag: `"${object.etag}"`,
				Size: object.size,
				StorageClass: 'STANDARD'
			});
		}
	}
	return {
		Name: bucket,
		Prefix: name(prefix),
		Delimiter: delimiter ? name(delimiter) : undefined,
		MaxKeys: limit,
		KeyCount: contents.length + prefixes.length,
		IsTruncated: truncated,
		ContinuationToken: token ?? undefined,
		NextContinuationToken: truncated ? Buffer.from(last).toString('base64url') : undefined,
		EncodingType: query.get('encoding-type') ?? undefined,
		Contents: contents,
		CommonPrefixes: prefixes.map((shared) => ({ Prefix: name(shared) }))
	};
}
