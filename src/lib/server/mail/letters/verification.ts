import { letter, pageAddress, type Letter } from './letter';

export interface VerificationPayload {
	token: string;
	name: string;
	course: string;
	labSection: string;
}

/** To somebody who joined with bench words and has no account yet. */
export function verification({ token, name, course, labSection }: VerificationPayload): Letter {
	return letter(
		`Confirm your address for ${course}`,
		[
			`${name},`,
			`you joined ${course}, ${labSection}. Confirm that this address is yours:\n${pageAddress(`/verify/${token}`)}`,
			'You will be asked for the password you chose. The link works once, for one day.',
			'If you did not join, leave it: no account is made.'
		],
		'You get this because somebody joined with this address.'
	);
}
