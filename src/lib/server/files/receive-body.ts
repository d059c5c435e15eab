import { Refusal } from '../errors';

const megabyte = 1024 * 1024;

/**
 * Takes in a body up to `limit` bytes and not one more, whatever length was announced.
 * Errors: Refusal 'too-large'; 'unprocessable' when it is empty.
 */
export async function receiveBody(
	body: ReadableStream<Uint8Array> | null,
	limit: number
): Promise<Uint8Array> {
	const parts: Uint8Array[] = [];
	let size = 0;
	const reader = body?.getReader();
	while (reader) {
		const { done, value } = await reader.read();
		if (done) break;
		size += value.byteLength;
		if (size > limit) {
			await reader.cancel().catch(() => undefined);
			throw new Refusal(
				'too-large',
				`The file is larger than ${Math.floor(limit / megabyte)} MB. Split it, or leave out what is not needed.`
			);
		}
		parts.push(value);
	}
	if (size === 0) throw new Refusal('unprocessable', 'The file is empty. Choose one with content.');
	return Buffer.concat(parts);
}
