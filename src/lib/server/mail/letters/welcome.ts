import { letter, pageAddress, type Letter } from './letter';

export interface WelcomePayload {
	name: string;
	course: string;
	slug: string;
	labSection?: string | undefined;
	/** in words: 'Tuesday 13:00' */
	meets?: string | undefined;
}

/** To a new member of a course. */
export function welcome({ name, course, slug, labSection, meets }: WelcomePayload): Letter {
	return letter(
		`You are in ${course}`,
		[
			`${name},`,
			labSection
				? `you are in ${course}, ${labSection}${meets ? ` (${meets})` : ''}.`
				: `you are in ${course}.`,
			`Rotation and dates:\n${pageAddress(`/c/${slug}`)}`
		],
		'You get this because you joined a course.'
	);
}
