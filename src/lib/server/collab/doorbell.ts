import { randomUUID } from 'node:crypto';
import { Redis } from 'ioredis';
import postgres from 'postgres';
import { reconnectAfter } from '../db';
import { logger } from '../logger';

/** What processes tell each other about live documents. None of it is needed for correctness: the log is the truth, and a sweep hears what got lost. */
export interface Rings {
	/** a document's log has grown to `seq`, or it has reached `epoch` */
	document(documentId: string, seq: number, epoch: number): void;
	/** presence of people connected elsewhere, as an awareness update */
	presence(name: string, bytes: Uint8Array): void;
	/** another process has opened the document and asks who is there */
	who(name: string): void;
	/** a person's rights or sessions changed */
	revoke(userId: string): void;
}

export interface Doorbell {
	document(documentId: string, seq: number, epoch: number): void;
	presence(name: string, bytes: Uint8Array): void;
	who(name: string): void;
	close(): Promise<void>;
}

/** A notification holds under 8,000 bytes; base64 makes 4 of 3. */
const largestPresence = 5_500;
const channel = 'meniscus_live';
/** Rung by verbs inside their transactions: `pg_notify('meniscus_revoke', <user id>)`. */
const revokeChannel = 'meniscus_revoke';

type Message =
	| { from: string; kind: 'document'; id: string; seq: number; epoch: number }
	| { from: string; kind: 'presence'; name: string; bytes: string }
	| { from: string; kind: 'who'; name: string };

/**
 * Opens the doorbell on connections of its own, outside the pool: a notification inside the append's transaction would
 * serialise all commits of the database. With `redisUrl` messages go through Redis, and through PostgreSQL while Redis does not answer.
 */
export async function openDoorbell(
	databaseUrl: string,
	redisUrl: string | undefined,
	rings: Rings
): Promise<Doorbell> {
	const me = randomUUID();
	const sql = postgres(databaseUrl, {
		max: 1,
		backoff: reconnectAfter,
		onnotice: () => undefined,
		connection: { application_name: 'meniscus doorbell' }
	});

	const receive = (text: string) => {
		try {
			const message = JSON.parse(text) as Message;
			if (message.from === me) return;
			if (message.kind === 'document') rings.document(message.id, message.seq, message.epoch);
			else if (message.kind === 'presence')
				rings.presence(message.name, Buffer.from(message.bytes, 'base64'));
			else rings.who(message.name);
		} catch (err) {
			logger.warn({ err }, 'live: a notification could not be read');
		}
	};
	// Both are listened to always, so that processes understand each other whichever way each could send.
	await sql.listen(channel, receive);
	await sql.listen(revokeChannel, (userId) => rings.revoke(userId));
	const redis = redisUrl ? openRedis(redisUrl, receive) : null;

	/** Newest message of each key; sent together, one round at a time. */
	const waiting = new Map<string, Message>();
	let sending = false;
	let closed = false;

	const send = async (messages: string[]) => {
		if (redis && (await redis.publish(messages))) return;
		await sql`select pg_notify(${channel}, message) from unnest(${messages}::text[]) as message`;
	};
	const flush = async () => {
		if (sending) return;
		sending = true;
		try {
			while (waiting.size > 0 && !closed) {
				const messages = [...waiting.values()].map((message) => JSON.stringify(message));
				waiting.clear();
				await send(messages);
			}
		} catch (err) {
			logger.warn({ err }, 'live: the doorbell did not ring; the sweep will');
		} finally {
			sending = false;
		}
	};
	const post = (key: string, message: Message) => {
		if (closed) return;
		waiting.set(key, message);
		setImmediate(() => void flush());
	};

	return {
		document: (id, seq, epoch) => post(`d${id}`, { from: me, kind: 'document', id, seq, epoch }),
		presence(name, bytes) {
			if (bytes.byteLength > largestPresence) return;
			post(`p${name}${Buffer.from(bytes.subarray(0, 8)).toString('hex')}`, {
				from: me,
				kind: 'presence',
				name,
				bytes: Buffer.from(bytes).toString('base64')
			});
		},
		who: (name) => post(`w${name}`, { from: me, kind: 'who', name }),
		async close() {
			closed = true;
			redis?.close();
			await sql.end({ timeout: 2 });
		}
	};
}

/** Publishing answers false when Redis is not reachable just now. */
function openRedis(url: string, receive: (text: string) => void) {
	const options = {
		lazyConnect: false,
		maxRetriesPerRequest: 1,
		enableOfflineQueue: false,
		retryStrategy: (attempt: number) => Math.min(10_000, 200 * attempt)
	};
	const sender = new Redis(url, options);
	const receiver = new Redis(url, { ...options, enableOfflineQueue: true, maxRetriesPerRequest: null });
	for (const [name, client] of Object.entries({ sender, receiver })) {
		let told = false;
		client.on('error', (err) => {
			if (!told) logger.warn({ err, name }, 'live: Redis is not reachable; PostgreSQL carries the doorbell');
			told = true;
		});
		client.on('ready', () => (told = false));
	}
	receiver.subscribe(channel).catch(() => undefined);
	receiver.on('message', (_channel, text) => receive(text));
	return {
		async publish(messages: string[]): Promise<boolean> {
			if (sender.status !== 'ready') return false;
			try {
				await Promise.all(messages.map((message) => sender.publish(channel, message)));
				return true;
			} catch {
				return false;
			}
		},
		close() {
			sender.disconnect();
			receiver.disconnect();
		}
	};
}
