import { letter, pageAddress, type Letter } from './letter';

const roles = { student: 'a student', grader: 'a grader', instructor: 'an instructor' } as const;

export interface InvitationPayload {
	token: string;
	course: string;
	institution: string;
	role: keyof typeof roles;
	from: string;
	name?: string | undefined;
	/** in words: '15 December' */
	until: string;
}

/** To somebody an instructor asked into a course. */
export function invitation({
	token,
	course,
	institution,
	role,
	from,
	name,
	until
}: InvitationPayload): Letter {
	return letter(
		`Your place in ${course}`,
		[
			name ? `${name},` : 'Hello,',
			`${from} added you to ${course} at ${institution} as ${roles[role]}.`,
			`Open this link to choose a password and begin:\n${pageAddress(`/invitation/${token}`)}`,
			`It works once, until ${until}. If you did not expect it, leave it: nothing happens.`
		],
		'You get this because an instructor typed this address.'
	);
}
