import { createServer } from 'node:http';
import { pathToFileURL } from 'node:url';
import { answerProblem, StoreProblem } from './object-store/answers.mjs';
import { answer } from './object-store/requests.mjs';
import { verify } from './object-store/signature.mjs';
import { Storage } from './object-store/storage.mjs';

// An S3-compatible store over a folder, for development and tests: loopback only, one process, no replication. It checks
// signatures and keeps what it confirmed, so that mistakes in either show up before a real store is used.

/**
 * @typedef {object} ObjectStore
 * @property {string} endpoint
 * @property {number} port
 * @property {() => Promise<void>} close
 *
 * @param {object} options
 * @param {string} options.folder
 * @param {string} options.keyId
 * @param {string} options.key
 * @param {string} [options.region]
 * @param {number} [options.port] 0: any
 * @param {string[]} [options.buckets] made when missing
 * @returns {Promise<ObjectStore>}
 */
export async function startObjectStore({ folder, keyId, key, region = 'us-east-1', port = 0, buckets = [] }) {
	const storage = await new Storage(folder).open();
	for (const bucket of buckets) if (!storage.has(bucket)) await storage.makeBucket(bucket);

	const server = createServer(async (request, response) => {
		try {
			const url = request.url ?? '/';
			const [path = '/', search = ''] = url.split(/\?(.*)/s);
			const payload = verify(
				{ method: request.method ?? 'GET', url, headers: request.headers },
				{ keyId, key, region },
				Date.now()
			);
			const [bucket = '', ...rest] = path.slice(1).split('/').map(decodeURIComponent);
			const query = new URLSearchParams(search.replaceAll('+', '%2B'));
			await answer({ storage, request, response, bucket, key: rest.join('/'), query, payload });
		} catch (problem) {
			answerProblem(
				request,
				response,
				problem instanceof URIError
					? new StoreProblem(400, 'InvalidURI', 'The address is malformed.')
					: problem
			);
		}
	});
	server.requestTimeout = 0;
	await new Promise((resolve, reject) => {
		server.once('error', reject);
		server.listen(port, '127.0.0.1', () => resolve(undefined));
	});
	const address = server.address();
	const bound = address && typeof address === 'object' ? address.port : port;
	return {
		endpoint: `http://127.0.0.1:${bound}`,
		port: bound,
		close: () =>
			new Promise((resolve) => {
				server.close(() => resolve());
				server.closeAllConnections();
			})
	};
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
	const { S3_FOLDER, S3_ACCESS_KEY_ID, S3_SECRET_ACCESS_KEY, S3_REGION, S3_BUCKET, S3_PORT } = process.env;
	if (!S3_FOLDER || !S3_ACCESS_KEY_ID || !S3_SECRET_ACCESS_KEY) {
		console.error(
			'Set S3_FOLDER, S3_ACCESS_KEY_ID and S3_SECRET_ACCESS_KEY; S3_PORT, S3_REGION and S3_BUCKET may be set.'
		);
		process.exit(1);
	}
	const store = await startObjectStore({
		folder: S3_FOLDER,
		keyId: S3_ACCESS_KEY_ID,
		key: S3_SECRET_ACCESS_KEY,
		region: S3_REGION || 'us-east-1',
		port: Number(S3_PORT ?? 0),
		buckets: S3_BUCKET ? [S3_BUCKET] : []
	});
	console.log(store.endpoint);
}
