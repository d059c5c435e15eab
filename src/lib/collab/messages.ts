// What the live-editing socket says beside the edits themselves.

/** Sent after edits and after every join: "tell me when everything up to here is committed". `n` counts up for each connection. */
export interface BarrierMessage {
	type: 'barrier';
	n: number;
}

/** Everything that arrived before barrier `n` is committed; `seq` is the document's newest committed sequence. */
export interface StoredMessage {
	type: 'stored';
	n: number;
	seq: number;
}

/**
 * The document took no more edits (frozen, sealed, no longer allowed): its epoch has ended. What was not yet stored
 * is the client's to offer again, as text or as amendments.
 */
export interface RefusedMessage {
	type: 'refused';
	reason: string;
}

export type ClientMessage = BarrierMessage;
export type ServerMessage = StoredMessage | RefusedMessage;

export function encodeMessage(message: ClientMessage | ServerMessage): string {
	return JSON.stringify(message);
}

/** null for anything that is not a message of a client. */
export function parseClientMessage(text: string): ClientMessage | null {
	const value = parseObject(text);
	return value?.type === 'barrier' && isCount(value.n) ? { type: 'barrier', n: value.n } : null;
}

/** null for anything that is not a message of the server. */
export function parseServerMessage(text: string): ServerMessage | null {
	const value = parseObject(text);
	if (value?.type === 'stored' && isCount(value.n) && isCount(value.seq))
		return { type: 'stored', n: value.n, seq: value.seq };
	if (value?.type === 'refused' && typeof value.reason === 'string')
		return { type: 'refused', reason: value.reason };
	return null;
}

export interface DocumentAddress {
	id: string;
	epoch: number;
}

/** Name of a document on the socket. It ends with the epoch, so that peers of an ended one do not send its refused edit again. */
export function documentName(id: string, epoch: number): string {
	if (!isCount(epoch) || !documentId.test(id)) throw new RangeError(`No document: ${id}, epoch ${epoch}`);
	return `${id}.${epoch}`;
}

/** null when it is not such a name. */
export function parseDocumentName(name: string): DocumentAddress | null {
	const dot = name.lastIndexOf('.');
	const id = name.slice(0, dot);
	const digits = name.slice(dot + 1);
	if (dot === -1 || !documentId.test(id) || !/^(?:0|[1-9]\d{0,14})$/.test(digits)) return null;
	return { id, epoch: Number(digits) };
}

const documentId = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/;

function isCount(value: unknown): value is number {
	return typeof value === 'number' && Number.isSafeInteger(value) && value >= 0;
}

function parseObject(text: string): Record<string, unknown> | null {
	if (text.length > 10_000) return null;
	try {
		const value: unknown = JSON.parse(text);
		return typeof value === 'object' && value !== null ? (value as Record<string, unknown>) : null;
	} catch {
		return null;
	}
}
