import type * as Y from 'yjs';

/**
 * - connecting: nothing known yet
 * - stored: everything typed here is committed on the server
 * - storing: something typed here is not confirmed yet
 * - offline: no connection; what is typed stays on this device until there is one
 * - refused: the server does not take part any more (see `refusal`)
 * - read-only: content arrives, edits are not taken
 */
export type LiveState = 'connecting' | 'stored' | 'storing' | 'offline' | 'refused' | 'read-only';

export type LiveRefusal = 'not-yours' | 'signed-out';

/** What this device holds and the server did not take, to be offered to its writer. */
export interface Unsent<Content> {
	/** content as it was here */
	here: Content;
	/** content as it is stored */
	stored: Content;
}

/** Keeps a document on this device. */
export interface LocalCopy {
	/** origin of the edits it brings back */
	origin: unknown;
	loaded: Promise<void>;
	close(): Promise<void>;
	remove(): Promise<void>;
}
export interface LocalCopies {
	open(name: string, doc: Y.Doc): Promise<LocalCopy>;
	/** names that begin so */
	names(prefix: string): Promise<string[]>;
}

export interface LiveConnectionOptions<Content> {
	documentId: string;
	epoch: number;
	/** whose local copies these are */
	person: string;
	url: string;
	/** content of a document in plain values, to say what was not taken */
	content(doc: Y.Doc): Content;
	/** after any change of state, document or unsent content */
	changed(): void;
	local?: LocalCopies | null;
	WebSocket?: unknown;
	/** milliseconds from an edit to the question whether it is stored */
	barrierMs?: number;
	/** milliseconds before the first and, growing, before later tries to connect again */
	reconnectMs?: { first: number; longest: number };
}
