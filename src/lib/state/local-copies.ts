import type * as Y from 'yjs';
import type { LocalCopies, LocalCopy } from './live-types';
import { databaseNames, dropEverything, keep, kept, keptIds } from './on-this-device';

/** Copies of live documents in this browser, one database for each person, document and epoch. */
export const browserCopies: LocalCopies = {
	async open(name: string, doc: Y.Doc): Promise<LocalCopy> {
		// Loaded when first needed: the page is useful before it.
		const { IndexeddbPersistence } = await import('y-indexeddb');
		// Listed before it is there: a database that nobody lists is never wiped.
		databaseNames.add(name);
		const copy = new IndexeddbPersistence(name, doc);
		return {
			origin: copy,
			loaded: copy.whenSynced.then(() => undefined),
			close: () => copy.destroy(),
			remove: async () => {
				await copy.clearData();
				databaseNames.delete(name);
			}
		};
	},
	async names(prefix: string): Promise<string[]> {
		const names = new Set(databaseNames.from(prefix));
		// Where the browser can tell, it also knows those whose list was cleared.
		if (typeof indexedDB !== 'undefined' && 'databases' in indexedDB) {
			for (const { name } of await indexedDB.databases()) if (name?.startsWith(prefix)) names.add(name);
		}
		return [...names];
	}
};

/** Something that is on this device only: what it is, and the page that sends it. */
export interface Unconfirmed {
	title: string;
	href: string;
}

/** Notes on this device that a document or marking holds something unconfirmed (null: nothing), for the question at signing out. */
export function noteUnconfirmed(person: string, id: string, what: Unconfirmed | null): void {
	keep(person, 'unconfirmed', id, what);
}

/** What this person did in this browser and the server has not confirmed, by title. */
export function unconfirmedWork(person: string): Unconfirmed[] {
	return keptIds(person, 'unconfirmed')
		.flatMap((id) => {
			const note = kept(person, 'unconfirmed', id);
			return isUnconfirmed(note) ? [note] : [];
		})
		.sort((a, b) => a.title.localeCompare(b.title));
}

function isUnconfirmed(note: unknown): note is Unconfirmed {
	return typeof note === 'object' && note !== null && 'title' in note && 'href' in note;
}

/** Wipes what this browser keeps for a person: signing out on a shared bench tablet leaves nothing behind. */
export async function forgetPerson(person: string): Promise<void> {
	const names = await browserCopies.names(`meniscus:${person}:`);
	dropEverything(person);
	await Promise.all(names.map(deleteDatabase));
}

/** Resolves also when another page still holds it: the browser deletes it as soon as that page lets go. */
function deleteDatabase(name: string): Promise<void> {
	return new Promise((resolve) => {
		const request = indexedDB.deleteDatabase(name);
		request.onsuccess = request.onerror = request.onblocked = () => resolve();
	});
}
