import { Readable } from 'node:stream';
import { readings as contracts } from '$lib/contracts';
import * as files from '$lib/server/files';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.readFile, async ({ viewer, params }) => {
	const { name, size, mediaType, bytes } = await files.open(viewer, params.file);
	return new Response(Readable.toWeb(bytes) as ReadableStream<Uint8Array>, {
		headers: {
			'content-type': mediaType,
			'content-length': String(size),
			// Never shown in the page's own origin, whatever it contains.
			'content-disposition': `attachment; filename*=UTF-8''${encodeURIComponent(name).replace(/['()*]/g, (sign) => `%${sign.charCodeAt(0).toString(16)}`)}`,
			'cache-control': 'private, no-store',
			'x-content-type-options': 'nosniff'
		}
	});
});
