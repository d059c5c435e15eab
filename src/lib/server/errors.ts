/**
 * The few kinds of refusal that verbs throw. None of them knows HTTP; http.ts maps them.
 * `message` is shown to people: what is so, then what to do.
 */
export class Refusal extends Error {
	constructor(
		readonly kind: RefusalKind,
		message: string,
		readonly detail: RefusalDetail = {}
	) {
		super(message);
		this.name = 'Refusal';
	}
}

export type RefusalKind =
	/** not signed in */
	| 'unauthenticated'
	/** visible, but not allowed */
	| 'forbidden'
	/** not there, or not visible to this person: the two look the same */
	| 'not-found'
	/** the input does not hold; fields say where */
	| 'unprocessable'
	/** somebody was faster, or the thing is in another state */
	| 'conflict'
	/** the revision named in If-Match is not the current one */
	| 'stale'
	/** closed, frozen, sealed */
	| 'too-late'
	| 'too-many'
	| 'too-large'
	/** a part that is needed does not answer; nothing was changed, later it may */
	| 'unavailable';

export interface RefusalDetail {
	/** field path -> what is wrong and what to do */
	fields?: Record<string, string>;
	/** seconds until another try makes sense */
	retryAfter?: number;
	/** machine-readable extras, shown to the client */
	extra?: Record<string, unknown>;
}

export const notFound = () => new Refusal('not-found', 'Not here, or not yours to see.');
export const forbidden = (message = 'You can see this, but not change it.') =>
	new Refusal('forbidden', message);
export const unprocessable = (message: string, fields?: Record<string, string>) =>
	new Refusal('unprocessable', message, fields ? { fields } : {});
export const conflict = (message: string, extra?: Record<string, unknown>) =>
	new Refusal('conflict', message, extra ? { extra } : {});
export const tooLate = (message: string) => new Refusal('too-late', message);
export const stale = (
	message = 'Somebody changed this in the meantime. Look at the new state, then repeat.'
) => new Refusal('stale', message);
