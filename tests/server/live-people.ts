import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { WebSocket } from 'ws';
import type * as Y from 'yjs';
import { readReadings, readText } from '../../src/lib/collab';
import { openLive, type Live } from '../../src/lib/server/collab/live';
import { connect, type Connection } from '../../src/lib/server/db';
import { LiveConnection, type LocalCopies } from '../../src/lib/state/live-connection';

/** The origin these servers and clients agree on. */
export const origin = 'http://meniscus.test';

export interface LiveServer {
	url: string;
	live: Live;
	connection: Connection;
	/** people whose sessions have ended */
	signedOut: Set<string>;
	close(): Promise<void>;
	/** cuts every socket without a word, as a crash does */
	cut(): void;
}

/** A server of the live service alone; the cookie is `person=<id>`. */
export async function serveLive(
	databaseUrl: string,
	over: { port?: number; redisUrl?: string; sweepMs?: { log: number; permissions: number } } = {}
): Promise<LiveServer> {
	const connection = connect(databaseUrl, 5);
	const signedOut = new Set<string>();
	const live = await openLive({
		connection,
		databaseUrl,
		redisUrl: over.redisUrl,
		origin,
		personOf: async (cookie) => {
			const id = /person=([0-9a-f-]{36})/.exec(cookie ?? '')?.[1];
			return id && !signedOut.has(id) ? { id } : null;
		},
		sweepMs: over.sweepMs ?? { log: 60_000, permissions: 60_000 }
	});
	const http = createServer((_request, response) => response.end());
	const sockets = new Set<{ destroy(): void }>();
	http.on('upgrade', (request, socket, head) => {
		sockets.add(socket);
		live.handleUpgrade(request, socket, head);
	});
	await new Promise<void>((resolve) => http.listen(over.port ?? 0, '127.0.0.1', resolve));
	return {
		url: `ws://127.0.0.1:${(http.address() as AddressInfo).port}/live`,
		live,
		connection,
		signedOut,
		cut() {
			for (const socket of sockets) socket.destroy();
			sockets.clear();
		},
		async close() {
			await live.close();
			http.close();
			http.closeAllConnections();
			await connection.close();
		}
	};
}

/** A browser's socket with a person's cookie. */
export function socketOf(person: string, from = origin) {
	return class extends WebSocket {
		constructor(url: string) {
			super(url, { headers: { cookie: `person=${person}`, origin: from } });
			// The browser's socket tells of failures by events alone.
			this.on('error', () => undefined);
		}
	};
}

export interface ClientOptions {
	person: string;
	documentId: string;
	epoch?: number;
	local?: LocalCopies | null;
}

/** What a document's page would do with it. */
export function openClient(server: { url: string }, options: ClientOptions): LiveConnection<unknown> {
	return new LiveConnection<unknown>({
		documentId: options.documentId,
		epoch: options.epoch ?? 1,
		person: options.person,
		url: server.url,
		content,
		changed: () => undefined,
		local: options.local ?? null,
		WebSocket: socketOf(options.person),
		barrierMs: 10
	});
}

/** Text of a section and readings of a bench: a document has one of the two. */
export function content(doc: Y.Doc): { text: string; readings: unknown } {
	return { text: readText(doc), readings: readReadings(doc, ['readings']) };
}

/** Waits for a condition, and says which it was when it never came. */
export async function until(
	what: string,
	condition: () => boolean | Promise<boolean>,
	ms = 10_000
): Promise<void> {
	const end = Date.now() + ms;
	while (!(await condition())) {
		if (Date.now() > end) throw new Error(`never: ${what}`);
		await new Promise((resolve) => setTimeout(resolve, 10));
	}
}
