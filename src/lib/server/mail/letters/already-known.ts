import { letter, pageAddress, type Letter } from './letter';

export interface AlreadyKnownPayload {
	course: string;
	labSection: string;
	/** the bench words, joined by hyphens; not a secret to whoever typed them */
	words: string;
}

/** To somebody who joined with bench words as if new, and has an account. */
export function alreadyKnown({ course, labSection, words }: AlreadyKnownPayload): Letter {
	return letter(
		`Sign in to join ${course}`,
		[
			'Hello,',
			`somebody joined ${course}, ${labSection} with this address. It has an account already, and nothing was changed.`,
			`If it was you, sign in and join here:\n${pageAddress(`/join/${words}`)}`,
			`If the password is forgotten:\n${pageAddress('/reset')}`
		],
		'You get this because somebody joined with this address.'
	);
}
