import { alreadyKnown } from './already-known';
import { invitation } from './invitation';
import type { Letter } from './letter';
import { receipt } from './receipt';
import { reset } from './reset';
import { returned } from './returned';
import { verification } from './verification';
import { welcome } from './welcome';

export { letter, pageAddress, type Letter } from './letter';

/**
 * Every kind of letter: payload -> subject and text. A payload is stored as JSON until the letter has gone; a field named
 * `token` is a secret and is taken out of the row then.
 */
export const letters = {
	'already-known': alreadyKnown,
	invitation,
	receipt,
	reset,
	returned,
	verification,
	welcome
} satisfies Record<string, (payload: never) => Letter>;

export type LetterKind = keyof typeof letters;
export type PayloadOf<K extends LetterKind> = Parameters<(typeof letters)[K]>[0];
