import type { Connection, Document } from '@hocuspocus/server';
import * as Y from 'yjs';
import type { DocumentAddress } from '$lib/collab';
import { logger } from '../logger';
import * as readings from '../readings';
import type { Database } from '../db';
import { AppendQueue } from './append-queue';
import { causeOf } from './cause-of';

/** Why the server ended a document's connections; the client reads it and acts. */
export type EndReason =
	/** an edit was refused: the epoch is over */
	| 'refused'
	/** another epoch is current */
	| 'epoch'
	/** rights changed: ask again */
	| 'changed'
	/** this process lets go of the document: connect again */
	| 'restart';

/** Edits that come from the log; anything else is an edit of a connection and has to be stored. */
export const fromLog = Symbol('from the log');

/** Permanent refusals of the database (data and constraint classes): trying again would block the document for ever. */
function isPermanent(problem: unknown): boolean {
	const code = (causeOf(problem) as { code?: unknown }).code;
	return typeof code === 'string' && /^2[23]/.test(code);
}

export interface RoomOptions {
	db: Database;
	name: DocumentAddress;
	document: Document;
	userOf(origin: unknown): string | null;
	/** rung after each commit, and when the epoch changed */
	ring(seq: number, epoch: number): void;
	/** all is stored and nobody is connected: may be unloaded */
	idle(): void;
}

/** One document of one epoch in this process: its queue towards the log, and its place in the log. */
export class Room {
	readonly name: DocumentAddress;
	readonly document: Document;
	readonly queue: AppendQueue;
	readonly #options: RoomOptions;
	/** Everything in the log up to here is in the document. */
	#cursor = 0;
	#wanted = 0;
	#reading: Promise<void> | null = null;
	#ended = false;
	#appended = 0;

	constructor(options: RoomOptions) {
		this.#options = options;
		this.name = options.name;
		this.document = options.document;
		const { db, name } = options;
		this.queue = new AppendQueue({
			append: async (userId, bytes) => {
				try {
					return await readings.appendUpdate(db, { documentId: name.id, epoch: name.epoch, userId, bytes });
				} catch (problem) {
					if (!isPermanent(problem)) throw problem;
					logger.error({ err: causeOf(problem), document: name.id }, 'live: an edit can not be stored');
					return null;
				}
			},
			stored: (seq) => this.#stored(seq),
			refused: () => void this.#refused(),
			retrying: (err, delay) =>
				logger.warn({ err: causeOf(err), delay, document: name.id }, 'live: an edit is not stored yet')
		});
	}

	get cursor(): number {
		return this.#cursor;
	}

	get ended(): boolean {
		return this.#ended;
	}

	/** Edits stored through this process since it opened the document. */
	get appended(): number {
		return this.#appended;
	}

	/** Fills the document from base and log, then listens; in this order, for what comes from the log is stored already. */
	async load(): Promise<void> {
		const entries = await readings.loadDocument(this.#options.db, this.name.id);
		this.#apply(entries);
		this.document.on('update', (update: Uint8Array, origin: unknown) => {
			if (origin === fromLog || this.#ended) return;
			const userId = this.#options.userOf(origin);
			// Nothing else writes into a live document; should it ever, storing under nobody's name is impossible, hence the end.
			if (userId === null) void this.#refused();
			else this.queue.take(userId, update);
		});
	}

	/** Reads the log up to at least `seq`. */
	async follow(seq: number): Promise<void> {
		this.#wanted = Math.max(this.#wanted, seq);
		if (this.#reading) return this.#reading;
		this.#reading = this.#read().finally(() => {
			this.#reading = null;
		});
		return this.#reading;
	}

	async #read(): Promise<void> {
		while (this.#wanted > this.#cursor && !this.#ended) {
			const before = this.#cursor;
			this.#apply(await readings.updatesAfter(this.#options.db, this.name.id, this.#cursor));
			if (this.#cursor === before) return;
		}
	}

	#apply(entries: readings.LoggedUpdate[]): void {
		if (entries.length === 0) return;
		Y.transact(
			this.document,
			() => {
				for (const entry of entries) Y.applyUpdate(this.document, entry.bytes, fromLog);
			},
			fromLog
		);
		this.#cursor = entries.reduce((highest, entry) => Math.max(highest, entry.seq), this.#cursor);
	}

	#stored(seq: number): void {
		this.#appended += 1;
		// A gap means that other processes stored something in between, which is read like any other news.
		if (seq === this.#cursor + 1) this.#cursor = seq;
		else if (seq > this.#cursor) void this.follow(seq).catch(() => undefined);
		this.#options.ring(seq, this.name.epoch);
		if (this.queue.drained && this.document.getConnectionsCount() === 0) this.#options.idle();
	}

	/** A merged edit can not be taken out of a document, and leaving it out of the log would hide the same client's later edits. */
	async #refused(): Promise<void> {
		if (this.#ended) return;
		this.queue.end();
		const { db, name } = this.#options;
		let epoch: number;
		for (let attempt = 0; ; attempt += 1) {
			try {
				epoch = await readings.raiseEpoch(db, name.id, name.epoch);
				break;
			} catch (err) {
				logger.warn({ err: causeOf(err), document: name.id }, 'live: the epoch could not be raised yet');
				await new Promise((resolve) => setTimeout(resolve, Math.min(5_000, 200 * 2 ** attempt)));
			}
		}
		this.#options.ring(this.#cursor, epoch);
		this.end('refused', epoch);
	}

	/** Tells everybody why, with the epoch that is current, and lets them go. */
	end(reason: EndReason, epoch = this.name.epoch): void {
		if (this.#ended) return;
		this.#ended = true;
		this.queue.end();
		for (const connection of this.document.getConnections()) endConnection(connection, reason, epoch);
	}
}

/** The reason travels as text in the closing message. */
export function endConnection(connection: Connection, reason: EndReason, epoch: number): void {
	connection.close({ code: 4205, reason: JSON.stringify({ reason, epoch }) });
}
