import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.readCourse, async ({ viewer, params }) => {
	const course = await courses.open(viewer, params.course);
	return { ...course, rotation: await courses.rotation(viewer, course.id) };
});
