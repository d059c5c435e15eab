import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import * as experiments from '$lib/server/experiments';
import { endpoint } from '$lib/server/http';

export const POST = endpoint(contracts.addAssignment, async ({ act, params, body }) => {
	const course = await courses.open(act.viewer, params.course);
	return experiments.addAssignment(act, { courseId: course.id, ...body });
});
