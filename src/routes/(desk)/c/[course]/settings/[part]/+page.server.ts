import * as courses from '$lib/server/courses';
import { notFound } from '$lib/server/errors';
import { forPage } from '$lib/server/http';
import type { PageServerLoad } from './$types';

const parts = ['people', 'teams', 'dates'] as const;
const firstPage = { limit: 200 };

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, course } = await event.parent();
		const part = parts.find((known) => known === event.params.part);
		if (!part) throw notFound();
		// Also the check: only who may change the course sees its people's addresses.
		const people = await courses.people(viewer, course.id, firstPage);
		const [sections, rotation, extensions] = await Promise.all([
			courses.sections(viewer, course.id),
			courses.rotation(viewer, course.id),
			courses.extensionsOf(viewer, course.id)
		]);
		return {
			part,
			people,
			sections,
			rotation,
			extensions,
			trail: [
				...(await event.parent()).trail,
				{ label: 'Settings', href: `/c/${course.slug}/settings/people` }
			]
		};
	});
