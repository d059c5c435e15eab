import type { IncomingMessage } from 'node:http';
import type { Duplex } from 'node:stream';
import {
	Hocuspocus,
	MessageType,
	type Connection as LiveConnection,
	type Document
} from '@hocuspocus/server';
import * as decoding from 'lib0/decoding';
import { WebSocketServer, type WebSocket } from 'ws';
import { applyAwarenessUpdate, encodeAwarenessUpdate } from 'y-protocols/awareness';
import { encodeMessage, parseClientMessage, parseDocumentName as readName } from '$lib/collab';
import type { Connection } from '../db';
import { objectionsTo } from '../db/durability';
import { logger } from '../logger';
import * as readings from '../readings';
import { openDoorbell, type Doorbell } from './doorbell';
import { endConnection, Room } from './room';
import { causeOf } from './cause-of';
import { keepVersion } from './keep-version';
import { stillAllowed } from './still-allowed';

/** The database is not fit to promise that anything is stored. */
export class UnfitForLiveError extends Error {}

export interface LivePerson {
	id: string;
}

export interface LiveOptions {
	connection: Connection;
	databaseUrl: string;
	redisUrl?: string | undefined;
	/** The only origin whose pages may open the socket. */
	origin: string;
	/** Who a request's cookies speak for; null when nobody. */
	personOf(cookieHeader: string | undefined): Promise<LivePerson | null>;
	sweepMs?: { log: number; permissions: number };
}

export interface Live {
	handleUpgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void;
	close(): Promise<void>;
	/** Documents open in this process. */
	openDocuments(): number;
}

interface Context {
	personId: string;
	cookie: string | undefined;
	socket: WebSocket;
}

/** Bytes of one message: a whole document that was edited offline for weeks still fits. */
const largestMessage = 8 * 1024 * 1024;
const largestPresenceMessage = 7 * 1024;
const presenceOrigin = Symbol('presence from another process');

/** Thrown in hooks: an object with a reason and no message, which the library sends to the client without logging it. */
function refusal(reason: 'not-yours' | 'epoch' | 'unavailable', epoch = 0): { reason: string } {
	return { reason: JSON.stringify({ reason, epoch }) };
}

/**
 * The live-editing service. *Stored* means committed: a client's barrier is answered when everything this process took before
 * it stands in the log. Broadcasting to other people never waits for that.
 */
export async function openLive(options: LiveOptions): Promise<Live> {
	const { connection, origin, personOf } = options;
	const db = connection.db;
	const sweepMs = options.sweepMs ?? { log: 5_000, permissions: 30_000 };
	const objections = await objectionsTo(connection.sql);
	if (objections.length > 0) throw new UnfitForLiveError(objections.join('\n'));

	const rooms = new Map<string, Room>();
	/** work that nobody waits for but the closing of the service */
	const background = new Set<Promise<void>>();
	const roomsOf = (documentId: string) => [...rooms.values()].filter((room) => room.name.id === documentId);

	const hear = (documentId: string, seq: number, epoch: number) => {
		for (const room of roomsOf(documentId)) {
			if (epoch > room.name.epoch) room.end('epoch', epoch);
			else if (seq > room.cursor) {
				room
					.follow(seq)
					.catch((err: unknown) => logger.warn({ err: causeOf(err) }, 'live: the log could not be read yet'));
			}
		}
	};

	const tellPresence = (name: string, document: Document, clients: number[]) => {
		if (clients.length > 0) doorbell.presence(name, encodeAwarenessUpdate(document.awareness, clients));
	};
	const doorbell: Doorbell = await openDoorbell(options.databaseUrl, options.redisUrl, {
		document: hear,
		presence(name, bytes) {
			const room = rooms.get(name);
			if (room && !room.ended) applyAwarenessUpdate(room.document.awareness, bytes, presenceOrigin);
		},
		who(name) {
			const room = rooms.get(name);
			if (room) tellPresence(name, room.document, [...room.document.awareness.getStates().keys()]);
		},
		revoke: (userId) => void checkConnections((context) => context.personId === userId)
	});

	const hocuspocus = new Hocuspocus({
		quiet: true,
		timeout: 20_000,
		async onAuthenticate({ documentName, connectionConfig, context }) {
			const name = readName(documentName);
			if (!name) throw refusal('not-yours');
			const { personId, socket } = context as Context;
			let access: readings.DocumentAccess | null;
			try {
				access = await readings.documentAccess(db, personId, name.id);
			} catch (err) {
				logger.warn({ err: causeOf(err) }, 'live: permission could not be read; the client will come again');
				socket.close(1013);
				throw refusal('unavailable');
			}
			if (!access) throw refusal('not-yours');
			if (access.epoch !== name.epoch) throw refusal('epoch', access.epoch);
			connectionConfig.readOnly = !access.write;
		},
		async onLoadDocument({ documentName, document, context }) {
			const name = readName(documentName);
			if (!name) throw refusal('not-yours');
			const room = new Room({
				db,
				name,
				document,
				userOf: (by) => {
					const person = (by as { context?: Partial<Context> } | null | undefined)?.context?.personId;
					return person ?? null;
				},
				ring: (seq, epoch) => doorbell.document(name.id, seq, epoch),
				idle: () => void hocuspocus.unloadDocument(document)
			});
			try {
				await room.load();
			} catch (err) {
				logger.warn({ err: causeOf(err) }, 'live: a document could not be read; the client will come again');
				(context as Context).socket.close(1013);
				throw refusal('unavailable');
			}
			rooms.set(documentName, room);
			document.awareness.on(
				'update',
				(change: { added: number[]; updated: number[]; removed: number[] }, by: unknown) => {
					if (by === presenceOrigin) return;
					tellPresence(documentName, document, [...change.added, ...change.updated, ...change.removed]);
				}
			);
			doorbell.who(documentName);
		},
		async connected({ connection: one, documentName }) {
			if (!belongs(one, documentName)) endConnection(one, 'restart', readName(documentName)?.epoch ?? 1);
		},
		async beforeHandleMessage({ update }) {
			if (update.byteLength <= largestPresenceMessage) return;
			const decoder = decoding.createDecoder(update);
			decoding.readVarString(decoder);
			if (decoding.readVarUint(decoder) === (MessageType.Awareness as number)) throw refusal('not-yours');
		},
		async onStateless({ payload, documentName, connection: one }) {
			const question = parseClientMessage(payload);
			if (!question) return;
			const room = rooms.get(documentName);
			if (!room || !belongs(one, documentName)) {
				endConnection(one, 'restart', readName(documentName)?.epoch ?? 1);
				return;
			}
			room.queue.barrier(() => {
				one.sendStateless(encodeMessage({ type: 'stored', n: question.n, seq: room.cursor }));
			});
		},
		async beforeUnloadDocument({ documentName }) {
			const room = rooms.get(documentName);
			// Stays until stored: a document loaded anew would not hold what still waits.
			if (room && !room.ended && !room.queue.drained) throw refusal('unavailable');
		},
		async afterUnloadDocument({ documentName }) {
			const room = rooms.get(documentName);
			rooms.delete(documentName);
			if (!room || room.ended || room.appended === 0) return;
			const keeping = keepVersion(db, room.name.id).finally(() => background.delete(keeping));
			background.add(keeping);
		}
	});

	/** False for a connection made in the moment in which its document was being unloaded. */
	function belongs(one: LiveConnection, documentName: string): boolean {
		const room = rooms.get(documentName);
		return room !== undefined && !room.ended && room.document === one.document && !room.document.isDestroyed;
	}

	async function checkConnections(concerned: (context: Context) => boolean): Promise<void> {
		for (const room of rooms.values()) {
			for (const one of room.document.getConnections()) {
				const context = one.context as Context;
				if (!concerned(context)) continue;
				try {
					const answer = await stillAllowed(db, personOf, context, room.name, one.readOnly);
					if (answer === 'signed-out') context.socket.close(4401);
					else if (answer === 'changed') endConnection(one, 'changed', room.name.epoch);
				} catch (err) {
					// Appends are checked one by one all the same; reading goes on until the database answers.
					logger.warn({ err: causeOf(err) }, 'live: permission could not be checked');
				}
			}
		}
	}

	const sweepLog = async () => {
		const ids = [...new Set([...rooms.values()].map((room) => room.name.id))];
		const positions = await readings.documentPositions(db, ids);
		for (const [id, { seq, epoch }] of positions) hear(id, seq, epoch);
	};
	const repeat = (work: () => Promise<void>, ms: number) => {
		const timer = setInterval(() => {
			work().catch((err: unknown) => logger.warn({ err: causeOf(err) }, 'live: a sweep failed'));
		}, ms);
		timer.unref();
		return timer;
	};
	const timers = [
		repeat(sweepLog, sweepMs.log),
		repeat(() => checkConnections(() => true), sweepMs.permissions)
	];

	const sockets = new WebSocketServer({ noServer: true, maxPayload: largestMessage });

	const turnAway = (socket: Duplex, status: string) => {
		socket.end(`HTTP/1.1 ${status}\r\nConnection: close\r\nContent-Length: 0\r\n\r\n`);
	};

	return {
		openDocuments: () => rooms.size,
		handleUpgrade(request, socket, head) {
			socket.on('error', () => socket.destroy());
			if (new URL(request.url ?? '/', 'http://meniscus').pathname !== '/live') {
				turnAway(socket, '404 Not Found');
				return;
			}
			if (request.headers.origin !== origin) {
				turnAway(socket, '403 Forbidden');
				return;
			}
			const cookie = request.headers.cookie;
			personOf(cookie)
				.then((person) => {
					if (!person) {
						turnAway(socket, '401 Unauthorized');
						return;
					}
					sockets.handleUpgrade(request, socket, head, (opened) => {
						opened.on('error', () => opened.terminate());
						hocuspocus.handleConnection(opened, request, {
							personId: person.id,
							cookie,
							socket: opened
						} satisfies Context);
					});
				})
				.catch((err: unknown) => {
					logger.warn({ err: causeOf(err) }, 'live: a session could not be read');
					turnAway(socket, '503 Service Unavailable');
				});
		},
		async close() {
			for (const timer of timers) clearInterval(timer);
			// Clients come back by themselves; what waits is stored first, within reason.
			const waiting = [...rooms.values()].map(
				(room) => new Promise<void>((resolve) => room.queue.barrier(resolve))
			);
			for (const one of sockets.clients) one.close(1012);
			await Promise.race([
				Promise.all(waiting),
				new Promise((resolve) => setTimeout(resolve, 5_000).unref())
			]);
			for (const one of sockets.clients) one.terminate();
			await Promise.all(background);
			sockets.close();
			await doorbell.close();
		}
	};
}
