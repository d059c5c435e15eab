import {
	CopyObjectCommand,
	DeleteObjectCommand,
	GetObjectCommand,
	PutObjectCommand,
	S3Client
} from '@aws-sdk/client-s3';
import type { Readable } from 'node:stream';
import { env } from '../env';
import { Refusal } from '../errors';
import { logger } from '../logger';

/** The store did not answer, or not in time. Nothing was recorded. */
export const storeUnavailable = () =>
	new Refusal('unavailable', 'The file was not stored: the file store does not answer. Try it again later.');

let client: S3Client | undefined;

function store(): S3Client {
	const settings = env();
	client ??= new S3Client({
		endpoint: settings.S3_ENDPOINT,
		region: settings.S3_REGION,
		credentials: {
			accessKeyId: settings.S3_ACCESS_KEY_ID,
			secretAccessKey: settings.S3_SECRET_ACCESS_KEY
		},
		// Names of buckets as subdomains need DNS that no local store has.
		forcePathStyle: true,
		requestChecksumCalculation: 'WHEN_REQUIRED',
		responseChecksumValidation: 'WHEN_REQUIRED',
		maxAttempts: 2,
		requestHandler: { connectionTimeout: 2_000, requestTimeout: 20_000 }
	});
	return client;
}

/** For tests: the next use reads the settings anew. */
export function forgetStore(): void {
	client?.destroy();
	client = undefined;
}

async function answering<T>(what: string, act: () => Promise<T>): Promise<T> {
	try {
		return await act();
	} catch (err) {
		logger.warn({ err, what }, 'files: the object store did not do it');
		throw storeUnavailable();
	}
}

export const incomingKey = (uploadId: string) => `incoming/${uploadId}`;
export const blobKey = (sha256: Uint8Array) => `sha256/${Buffer.from(sha256).toString('hex')}`;

export const put = (key: string, bytes: Uint8Array, mediaType: string) =>
	answering('put', () =>
		store().send(
			new PutObjectCommand({
				Bucket: env().S3_BUCKET,
				Key: key,
				Body: bytes,
				ContentLength: bytes.byteLength,
				ContentType: mediaType
			})
		)
	);

export const copy = (from: string, to: string) =>
	answering('copy', () =>
		store().send(
			new CopyObjectCommand({ Bucket: env().S3_BUCKET, Key: to, CopySource: `${env().S3_BUCKET}/${from}` })
		)
	);

export const remove = (key: string) =>
	answering('delete', () => store().send(new DeleteObjectCommand({ Bucket: env().S3_BUCKET, Key: key })));

export async function read(key: string): Promise<Readable> {
	const answer = await answering('get', () =>
		store().send(new GetObjectCommand({ Bucket: env().S3_BUCKET, Key: key }))
	);
	if (!answer.Body) throw storeUnavailable();
	return answer.Body as Readable;
}
