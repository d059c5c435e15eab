import { letter, pageAddress, type Letter } from './letter';

export interface ResetPayload {
	token: string;
	name: string;
}

/** To somebody who asked for a new password. */
export function reset({ token, name }: ResetPayload): Letter {
	return letter(
		'Choose a new password',
		[
			`${name},`,
			`choose a new password here:\n${pageAddress(`/reset/${token}`)}`,
			'The link works once, for one hour. Afterwards every device is signed out.',
			'If you did not ask for it, leave it: your password stays as it is.'
		],
		'You get this because somebody asked for a new password for this address.'
	);
}
