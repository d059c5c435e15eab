import type * as Y from 'yjs';
import type { LocalCopies, LocalCopy } from './live-connection';

/** Copies of live documents in this browser, one database for each person, document and epoch. */
export const browserCopies: LocalCopies = {
	async open(name: string, doc: Y.Doc): Promise<LocalCopy> {
		// Loaded when first needed: the page is useful before it.
		const { IndexeddbPersistence } = await import('y-indexeddb');
		const kept = new IndexeddbPersistence(name, doc);
		return {
			origin: kept,
			loaded: kept.whenSynced.then(() => undefined),
			close: () => kept.destroy(),
			remove: () => kept.clearData()
		};
	},
	async names(prefix: string): Promise<string[]> {
		if (typeof indexedDB === 'undefined' || !('databases' in indexedDB)) return [];
		const databases = await indexedDB.databases();
		return databases.flatMap(({ name }) => (name?.startsWith(prefix) ? [name] : []));
	}
};

const unconfirmedPrefix = 'meniscus unconfirmed ';

/** Notes on this device that a document holds something unconfirmed, for the question at signing out. */
export function noteUnconfirmed(person: string, documentId: string, waiting: boolean): void {
	try {
		const key = `${unconfirmedPrefix}${person} ${documentId}`;
		if (waiting) localStorage.setItem(key, '1');
		else localStorage.removeItem(key);
	} catch {
		// Without storage there is nothing to wipe either.
	}
}

/** Documents of this person in this browser that hold something the server has not confirmed. */
export function unconfirmedDocuments(person: string): string[] {
	try {
		const prefix = `${unconfirmedPrefix}${person} `;
		return Object.keys(localStorage)
			.filter((key) => key.startsWith(prefix))
			.map((key) => key.slice(prefix.length));
	} catch {
		return [];
	}
}

/** Wipes this person's copies from this browser: signing out on a shared bench tablet leaves nothing behind. */
export async function forgetPerson(person: string): Promise<void> {
	for (const documentId of unconfirmedDocuments(person)) noteUnconfirmed(person, documentId, false);
	for (const name of await browserCopies.names(`meniscus:${person}:`)) indexedDB.deleteDatabase(name);
}
