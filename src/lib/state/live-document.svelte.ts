import type { Awareness } from 'y-protocols/awareness';
import type * as Y from 'yjs';
import { readText } from '$lib/collab';
import {
	LiveConnection,
	type LiveConnectionOptions,
	type LiveRefusal,
	type LiveState,
	type Unsent
} from './live-connection';
import { browserCopies, noteUnconfirmed } from './local-copies';

export type { LiveRefusal, LiveState, Unsent } from './live-connection';

/** A live document as components see it: every property is reactive. Open it in the browser only, and destroy it with the page. */
export interface LiveDocument<Content = string> {
	/** another document after an epoch ended: bind editors inside `{#key live.doc}` or an effect that reads it */
	readonly doc: Y.Doc;
	readonly awareness: Awareness | null;
	readonly state: LiveState;
	readonly refusal: LiveRefusal | null;
	readonly storedAt: Date | null;
	/** edits made here that the server has not confirmed */
	readonly waiting: number;
	/** the server's content has arrived */
	readonly synced: boolean;
	readonly canWrite: boolean;
	/** what stood here and was not taken (the document was closed, the person may not write any more): offer it as text */
	readonly unsent: Unsent<Content> | null;
	dismissUnsent(): Promise<void>;
	destroy(): void;
}

export interface LiveDocumentOptions<Content> {
	documentId: string;
	epoch: number;
	/** id of the person at the keyboard: copies on this device are theirs alone */
	person: string;
	/** what it is, for the list of what is not stored yet: "Abstract" */
	title: string;
	/** readings and the like say what their content is; a section's is its text */
	content?: (doc: Y.Doc) => Content;
	url?: string;
	/** false for people who only read: nothing is kept on this device */
	write?: boolean;
}

/** Address of the live socket of this page's server. */
export function liveUrl(page: { protocol: string; host: string } = location): string {
	return `${page.protocol === 'https:' ? 'wss' : 'ws'}://${page.host}/live`;
}

export function openLiveDocument<Content = string>(
	options: LiveDocumentOptions<Content>
): LiveDocument<Content> {
	const content = options.content ?? (readText as unknown as (doc: Y.Doc) => Content);
	const settings: LiveConnectionOptions<Content> = {
		documentId: options.documentId,
		epoch: options.epoch,
		person: options.person,
		url: options.url ?? liveUrl(),
		content,
		local: options.write === false ? null : browserCopies,
		changed: () => take()
	};
	const connection = new LiveConnection<Content>(settings);
	// The page it is written on, also once the person has gone to another.
	const place = { title: options.title, href: location.pathname };
	// One state for each property, so that a reader of the document is not woken by every stored edit.
	let doc = $state.raw(connection.doc);
	let awareness = $state.raw(connection.awareness);
	let state = $state.raw(connection.state);
	let refusal = $state.raw(connection.refusal);
	let storedAt = $state.raw(connection.storedAt);
	let waiting = $state.raw(connection.waiting);
	let synced = $state.raw(connection.synced);
	let canWrite = $state.raw(connection.canWrite);
	let unsent = $state.raw(connection.unsent);

	function take(): void {
		doc = connection.doc;
		awareness = connection.awareness;
		state = connection.state;
		refusal = connection.refusal;
		storedAt = connection.storedAt;
		waiting = connection.waiting;
		synced = connection.synced;
		canWrite = connection.canWrite;
		unsent = connection.unsent;
		noteUnconfirmed(options.person, options.documentId, waiting > 0 || unsent !== null ? place : null);
	}

	return {
		get doc() {
			return doc;
		},
		get awareness() {
			return awareness;
		},
		get state() {
			return state;
		},
		get refusal() {
			return refusal;
		},
		get storedAt() {
			return storedAt;
		},
		get waiting() {
			return waiting;
		},
		get synced() {
			return synced;
		},
		get canWrite() {
			return canWrite;
		},
		get unsent() {
			return unsent;
		},
		dismissUnsent: () => connection.dismissUnsent(),
		destroy: () => connection.destroy()
	};
}
