import type { IncomingMessage } from 'node:http';
import type { Duplex } from 'node:stream';
import { readSession } from '../auth';
import { connection } from '../db';
import { env } from '../env';
import { logger } from '../logger';
import { openLive, type Live } from './live';

export { openLive, UnfitForLiveError, type Live, type LiveOptions } from './live';
export { AppendQueue } from './append-queue';

let opening: Promise<Live> | undefined;

/**
 * Opens this process's service. Rejects with UnfitForLiveError when the database may lose what it confirmed; the process
 * must not serve then.
 */
export function startLive(): Promise<Live> {
	opening ??= openLive({
		connection: connection(),
		databaseUrl: env().DATABASE_URL,
		redisUrl: env().REDIS_URL,
		origin: env().ORIGIN,
		personOf: async (cookieHeader) => (await readSession(cookieHeader))?.viewer ?? null
	});
	opening.catch(() => (opening = undefined));
	return opening;
}

/** For the HTTP server's 'upgrade' event, path /live. */
export function handleUpgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void {
	startLive()
		.then((live) => live.handleUpgrade(request, socket, head))
		.catch((err: unknown) => {
			logger.error({ err }, 'live: the service could not be opened');
			socket.destroy();
		});
}

/** Stores what waits and closes every connection. */
export async function closeLive(): Promise<void> {
	const live = await opening?.catch(() => undefined);
	opening = undefined;
	await live?.close();
}
