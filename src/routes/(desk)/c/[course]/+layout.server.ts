import * as courses from '$lib/server/courses';
import { forPage } from '$lib/server/http';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer } = await event.parent();
		const course = await courses.open(viewer, event.params.course);
		return { course, trail: [{ label: course.code, href: `/c/${course.slug}` }] };
	});
