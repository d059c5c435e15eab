import { letter, pageAddress, type Letter } from './letter';

export interface ReturnedPayload {
	name: string;
	course: string;
	title: string;
	slug: string;
	work: string;
}

/** To an author whose report is back. The mark itself stays behind the sign-in: mail is read over shoulders. */
export function returned({ name, course, title, slug, work }: ReturnedPayload): Letter {
	return letter(
		`Back with you: ${title}`,
		[
			`${name},`,
			`your report "${title}" in ${course} is marked and back with you.`,
			`Mark, levels and remarks, each beside the words it is about:\n${pageAddress(`/c/${slug}/w/${work}/returned`)}`,
			'You can answer each remark there.'
		],
		'You get this because you handed in this report.'
	);
}
