import type { Repeatable } from '../db';

/** The person a request speaks for. */
export interface Viewer {
	id: string;
	name: string;
	initials: string;
	email: string;
	siteAdministrator: boolean;
	theme: 'system' | 'light' | 'dark';
}

/** First argument of every verb that changes something: who acts, and what the request carries beside its body. */
export interface Act {
	viewer: Viewer;
	/** Idempotency-Key, when the client sent one */
	repeatable?: Repeatable;
	/** If-Match: the revision the client saw */
	revision?: number;
}
