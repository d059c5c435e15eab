import { HocuspocusProvider, HocuspocusProviderWebsocket } from '@hocuspocus/provider';
import type { Awareness } from 'y-protocols/awareness';
import * as Y from 'yjs';
import { documentName, encodeMessage, parseServerMessage } from '$lib/collab';
import type { LiveConnectionOptions, LiveRefusal, LiveState, LocalCopy, Unsent } from './live-types';

export type {
	LiveConnectionOptions,
	LiveRefusal,
	LiveState,
	LocalCopies,
	LocalCopy,
	Unsent
} from './live-types';

interface ServerWord {
	reason: 'refused' | 'epoch' | 'changed' | 'restart' | 'not-yours' | 'unavailable';
	epoch: number;
}

const signedOut = 4401;

function readWord(text: unknown): ServerWord | null {
	if (typeof text !== 'string' || !text.startsWith('{')) return null;
	try {
		return JSON.parse(text) as ServerWord;
	} catch {
		return null;
	}
}

/** True when `doc` holds something that `other` lacks. */
export function holdsMore(doc: Y.Doc, other: Y.Doc): boolean {
	return !Y.snapshotContainsUpdate(Y.snapshot(other), Y.encodeStateAsUpdate(doc));
}

function leave(provider: HocuspocusProvider): void {
	provider.destroy();
	provider.configuration.websocketProvider.destroy();
}

/** One document's connection: state, confirmation, local copy, and the change to a fresh document when an epoch ends. */
export class LiveConnection<Content = unknown> {
	readonly #options: LiveConnectionOptions<Content>;
	#doc: Y.Doc;
	#provider: HocuspocusProvider;
	#copy: LocalCopy | null = null;
	#epoch: number;
	/** Counts replacements of the document: answers to earlier ones are not heard. */
	#generation = 0;
	#destroyed = false;

	#connected = false;
	#synced = false;
	#readOnly = false;
	#keepsCopy = true;
	#refusal: LiveRefusal | null = null;
	#everConfirmed = false;

	/** Edits made here, and how many of them a confirmation covers. */
	#edits = 0;
	#confirmed = 0;
	#barrier = 0;
	/** Barriers of earlier connections are void: what they followed may have been lost with the connection. */
	#firstBarrier = 1;
	readonly #sent = new Map<number, number>();
	#timer: ReturnType<typeof setTimeout> | null = null;
	#waitingSince = 0;
	#storedAt: Date | null = null;

	/** Documents of ended epochs that may hold more than is stored. */
	readonly #earlier: { doc: Y.Doc; copy: LocalCopy | null }[] = [];
	#unsent: Unsent<Content> | null = null;

	constructor(options: LiveConnectionOptions<Content>) {
		this.#options = options;
		this.#epoch = options.epoch;
		const { doc, provider } = this.#begin();
		this.#doc = doc;
		this.#provider = provider;
		this.#listenToBrowser(true);
		void this.#findEarlier();
	}

	/** Changes when an epoch ends: bind anew whenever `changed` finds another one. */
	get doc(): Y.Doc {
		return this.#doc;
	}
	get awareness(): Awareness | null {
		return this.#provider.awareness;
	}
	get epoch(): number {
		return this.#epoch;
	}
	get storedAt(): Date | null {
		return this.#storedAt;
	}
	get unsent(): Unsent<Content> | null {
		return this.#unsent;
	}
	get refusal(): LiveRefusal | null {
		return this.#refusal;
	}
	/** Edits made here that are not confirmed. */
	get waiting(): number {
		return this.#edits - this.#confirmed;
	}
	/** The server's content has arrived at least once since the last connection. */
	get synced(): boolean {
		return this.#synced;
	}
	get canWrite(): boolean {
		return !this.#readOnly && this.#refusal === null;
	}

	get state(): LiveState {
		if (this.#refusal) return 'refused';
		if (!this.#connected) return this.#everConfirmed || this.#gaveUp ? 'offline' : 'connecting';
		if (this.#readOnly) return this.#synced ? 'read-only' : 'connecting';
		if (!this.#everConfirmed) return 'connecting';
		return this.#synced && this.#confirmed === this.#edits ? 'stored' : 'storing';
	}

	/** The writer has seen what was not taken; it is forgotten on this device too. */
	async dismissUnsent(): Promise<void> {
		this.#unsent = null;
		this.#options.changed();
		for (const { doc, copy } of this.#earlier.splice(0)) {
			await copy?.remove();
			doc.destroy();
		}
	}

	destroy(): void {
		if (this.#destroyed) return;
		this.#destroyed = true;
		this.#generation += 1;
		if (this.#timer) clearTimeout(this.#timer);
		this.#listenToBrowser(false);
		leave(this.#provider);
		void this.#copy?.close();
		for (const { doc, copy } of this.#earlier) {
			void copy?.close();
			doc.destroy();
		}
		this.#doc.destroy();
	}

	#gaveUp = false;

	/** A fresh document and connection for the current epoch. */
	#begin(): { doc: Y.Doc; provider: HocuspocusProvider } {
		const generation = ++this.#generation;
		const current = () => generation === this.#generation && !this.#destroyed;
		const { documentId, url, WebSocket } = this.#options;
		const { first, longest } = this.#options.reconnectMs ?? { first: 500, longest: 5_000 };
		this.#connected = this.#synced = this.#readOnly = false;
		this.#voidBarriers();
		this.#edits = this.#confirmed = 0;
		const doc = new Y.Doc();
		// One socket for each document: a refusal of one never disturbs another.
		const socket = new HocuspocusProviderWebsocket({
			url,
			...(WebSocket ? { WebSocketPolyfill: WebSocket } : {}),
			delay: first,
			minDelay: first,
			maxDelay: longest,
			messageReconnectTimeout: 40_000
		});
		const provider = new HocuspocusProvider({
			websocketProvider: socket,
			name: documentName(documentId, this.#epoch),
			document: doc,
			// The cookie of the upgrade says who asks; the protocol wants a word all the same.
			token: 'cookie',
			onAuthenticated: ({ scope }) => {
				if (!current()) return;
				this.#connected = true;
				this.#readOnly = (scope as string) === 'readonly';
				this.#options.changed();
			},
			onAuthenticationFailed: ({ reason }) => {
				if (current()) this.#turnedAway(readWord(reason));
			},
			onSynced: () => {
				if (current()) this.#onSynced();
			},
			onStateless: ({ payload }) => {
				if (current()) this.#onAnswer(payload);
			},
			onClose: ({ event }) => {
				if (current()) this.#onClose(event);
			}
		});
		provider.attach();
		doc.on('update', (_update: Uint8Array, origin: unknown) => {
			if (!current() || origin === provider) return;
			// What comes back from the local copy may never have reached the server, so it counts like typing.
			this.#edits += 1;
			this.#scheduleBarrier();
			this.#options.changed();
		});
		if (this.#options.local && this.#keepsCopy) void this.#keepCopy(doc, current);
		return { doc, provider };
	}

	async #keepCopy(doc: Y.Doc, current: () => boolean): Promise<void> {
		const { local } = this.#options;
		try {
			const copy = await local?.open(this.#copyName(this.#epoch), doc);
			if (!copy) return;
			if (!current()) return void copy.close();
			this.#copy = copy;
		} catch {
			// A browser without storage (private windows) still writes, only not through a crash of the page.
		}
	}

	#copyName(epoch: number): string {
		return `${this.#copyPrefix}${epoch}`;
	}
	get #copyPrefix(): string {
		return `meniscus:${this.#options.person}:${this.#options.documentId}:`;
	}

	/** Copies of ended epochs from earlier visits. */
	async #findEarlier(): Promise<void> {
		const { local } = this.#options;
		if (!local) return;
		try {
			for (const name of await local.names(this.#copyPrefix)) {
				const epoch = Number(name.slice(this.#copyPrefix.length));
				if (!(epoch < this.#epoch)) continue;
				const doc = new Y.Doc();
				const copy = await local.open(name, doc);
				await copy.loaded;
				if (this.#destroyed) return void copy.close();
				this.#earlier.push({ doc, copy });
			}
		} catch {
			return;
		}
		if (this.#synced) this.#compareEarlier();
	}

	#onSynced(): void {
		this.#synced = this.#provider.isSynced;
		if (!this.#synced) return;
		if (this.#readOnly && this.#keepsCopy && this.#holdsOwn()) {
			// The document on screen mixes what is stored with edits that are not taken: show what is stored, offer the rest.
			this.#keepsCopy = false;
			this.#replace(this.#epoch);
			return;
		}
		if (!this.#readOnly) this.#ask();
		this.#compareEarlier();
		this.#options.changed();
	}

	#holdsOwn(): boolean {
		return this.#edits > 0 || this.#copy !== null;
	}

	/** Leaves the document behind, to be compared, and opens a fresh one. */
	#replace(epoch: number): void {
		const left = { doc: this.#doc, copy: this.#copy };
		const provider = this.#provider;
		this.#copy = null;
		this.#epoch = epoch;
		const fresh = this.#begin();
		this.#doc = fresh.doc;
		this.#provider = fresh.provider;
		this.#earlier.push(left);
		leave(provider);
		this.#options.changed();
	}

	#compareEarlier(): void {
		const kept: { doc: Y.Doc; copy: LocalCopy | null }[] = [];
		for (const left of this.#earlier) {
			if (holdsMore(left.doc, this.#doc)) kept.push(left);
			else {
				void left.copy?.remove();
				left.doc.destroy();
			}
		}
		this.#earlier.length = 0;
		this.#earlier.push(...kept);
		const last = kept.at(-1);
		if (!last) return;
		const here = this.#options.content(last.doc);
		const stored = this.#options.content(this.#doc);
		this.#unsent = JSON.stringify(here) === JSON.stringify(stored) ? null : { here, stored };
		this.#options.changed();
	}

	#turnedAway(word: ServerWord | null): void {
		if (word?.reason === 'epoch' && word.epoch !== this.#epoch) this.#replace(word.epoch);
		else if (word?.reason !== 'unavailable') this.#refuse('not-yours');
	}

	#refuse(refusal: LiveRefusal): void {
		this.#refusal = refusal;
		// What is stored may not be seen any more; what this person typed and nobody took is still theirs to copy.
		const left = this.#earlier.at(-1)?.doc ?? (this.waiting > 0 ? this.#doc : null);
		if (refusal === 'not-yours' && left) {
			const nothing = new Y.Doc();
			this.#unsent = { here: this.#options.content(left), stored: this.#options.content(nothing) };
			nothing.destroy();
		}
		this.#provider.configuration.websocketProvider.disconnect();
		this.#options.changed();
	}

	#onClose(event: { code?: number; reason?: unknown }): void {
		this.#connected = this.#synced = false;
		this.#gaveUp = true;
		this.#voidBarriers();
		if (event.code === signedOut) return this.#refuse('signed-out');
		const word = readWord(event.reason);
		if (word?.reason === 'refused' || word?.reason === 'epoch')
			this.#replace(Math.max(word.epoch, this.#epoch));
		else if (word) {
			// Rights changed, or the process let go: the same document over a new socket. Closing makes the library come again.
			const socket = this.#provider.configuration.websocketProvider;
			socket.webSocket?.close();
		}
		this.#options.changed();
	}

	#voidBarriers(): void {
		this.#sent.clear();
		this.#firstBarrier = this.#barrier + 1;
		if (this.#timer) clearTimeout(this.#timer);
		this.#timer = null;
		this.#waitingSince = 0;
	}

	#scheduleBarrier(): void {
		const pause = this.#options.barrierMs ?? 150;
		const now = Date.now();
		this.#waitingSince ||= now;
		if (this.#timer) clearTimeout(this.#timer);
		// Somebody who never pauses is answered all the same.
		const delay = Math.max(0, Math.min(pause, this.#waitingSince + 4 * pause - now));
		this.#timer = setTimeout(() => this.#ask(), delay);
	}

	/** Asks whether everything so far is stored. Only on a connection that has exchanged everything, in whose order the question stands behind the edits. */
	#ask(): void {
		if (this.#timer) clearTimeout(this.#timer);
		this.#timer = null;
		this.#waitingSince = 0;
		if (!this.#synced || this.#readOnly) return;
		this.#barrier += 1;
		this.#sent.set(this.#barrier, this.#edits);
		this.#provider.sendStateless(encodeMessage({ type: 'barrier', n: this.#barrier }));
	}

	#onAnswer(payload: string): void {
		const answer = parseServerMessage(payload);
		if (answer?.type !== 'stored' || answer.n < this.#firstBarrier) return;
		const covered = this.#sent.get(answer.n);
		if (covered === undefined) return;
		for (const n of this.#sent.keys()) if (n <= answer.n) this.#sent.delete(n);
		this.#confirmed = Math.max(this.#confirmed, covered);
		this.#everConfirmed = true;
		this.#storedAt = new Date();
		this.#options.changed();
	}

	readonly #online = () => {
		if (!this.#refusal) void this.#provider.configuration.websocketProvider.connect();
	};
	/** A dead connection is not noticed for half a minute otherwise. */
	readonly #offline = () => {
		this.#provider.configuration.websocketProvider.webSocket?.close();
		this.#connected = this.#synced = false;
		this.#gaveUp = true;
		this.#voidBarriers();
		this.#options.changed();
	};

	#listenToBrowser(on: boolean): void {
		if (typeof window === 'undefined') return;
		const act = on ? 'addEventListener' : 'removeEventListener';
		window[act]('online', this.#online);
		window[act]('offline', this.#offline);
	}
}
