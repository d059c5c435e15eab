import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.listPeople, async ({ viewer, params, query }) => {
	const course = await courses.open(viewer, params.course);
	return courses.people(viewer, course.id, query);
});
