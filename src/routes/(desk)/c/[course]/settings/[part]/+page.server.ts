import * as courses from '$lib/server/courses';
import * as experiments from '$lib/server/experiments';
import { notFound } from '$lib/server/errors';
import { forPage } from '$lib/server/http';
import type { PageServerLoad } from './$types';

const parts = ['people', 'teams', 'dates'] as const;
/** A course rarely has more; what teams are made of is on the first page. */
const pageSize = 200;

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, course } = await event.parent();
		const part = parts.find((known) => known === event.params.part);
		if (!part) throw notFound();
		// Also the check: only who may change the course sees its people's addresses.
		const people = await courses.people(viewer, course.id, { limit: pageSize });
		const [sections, rotation, extensions, library] = await Promise.all([
			courses.sections(viewer, course.id),
			courses.rotation(viewer, course.id),
			courses.extensionsOf(viewer, course.id),
			experiments.library(viewer, course.id)
		]);
		return {
			part,
			people,
			pageSize,
			sections,
			rotation,
			extensions,
			library,
			trail: [
				...(await event.parent()).trail,
				{ label: 'Settings', href: `/c/${course.slug}/settings/people` }
			]
		};
	});
