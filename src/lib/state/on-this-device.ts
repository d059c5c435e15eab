/**
 * Small things this browser keeps for one person. Every key begins with the person, so that two people at one computer
 * never see or send each other's, and signing out takes away what is one's own and nothing else.
 */
export type Kept = 'marking' | 'read' | 'unconfirmed';

const ofPerson = (person: string) => `meniscus:${person}:`;
const ofKind = (person: string, kind: Kept) => `${ofPerson(person)}${kind}:`;

/** Null when nothing is kept, or the browser keeps nothing (private windows, storage forbidden). */
export function kept(person: string, kind: Kept, id: string): unknown {
	try {
		return JSON.parse(localStorage.getItem(ofKind(person, kind) + id) ?? 'null');
	} catch {
		return null;
	}
}

/** Null takes it away. False when the browser keeps nothing: it is gone with the page. */
export function keep(person: string, kind: Kept, id: string, value: unknown): boolean {
	try {
		if (value === null) localStorage.removeItem(ofKind(person, kind) + id);
		else localStorage.setItem(ofKind(person, kind) + id, JSON.stringify(value));
		return true;
	} catch {
		return false;
	}
}

/** Ids under which something of a kind is kept for a person. */
export function keptIds(person: string, kind: Kept): string[] {
	const prefix = ofKind(person, kind);
	return keysFrom(prefix).map((key) => key.slice(prefix.length));
}

export function dropEverything(person: string): void {
	for (const key of keysFrom(ofPerson(person))) localStorage.removeItem(key);
}

function keysFrom(prefix: string): string[] {
	try {
		return Object.keys(localStorage).filter((key) => key.startsWith(prefix));
	} catch {
		return [];
	}
}

/** Names of the databases of this browser, which not every browser can list by itself. They begin with the person too. */
export const databaseNames = {
	add: (name: string): void => {
		try {
			localStorage.setItem(name + ending, '1');
		} catch {
			// A browser that keeps no list keeps no databases either.
		}
	},
	delete: (name: string): void => {
		try {
			localStorage.removeItem(name + ending);
		} catch {
			// as above
		}
	},
	from: (prefix: string): string[] =>
		keysFrom(prefix).flatMap((key) => (key.endsWith(ending) ? [key.slice(0, -ending.length)] : []))
};
const ending = ':database';
