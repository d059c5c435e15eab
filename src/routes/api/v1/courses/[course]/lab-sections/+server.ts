import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const POST = endpoint(contracts.addLabSection, async ({ act, params, body }) => {
	const course = await courses.open(act.viewer, params.course);
	return courses.addLabSection(act, { courseId: course.id, ...body });
});
