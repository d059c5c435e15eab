import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const PUT = endpoint(contracts.placeInTeam, async ({ act, params, body }) => {
	const course = await courses.open(act.viewer, params.course);
	return courses.placeInTeam(act, { courseId: course.id, userId: params.user, teamId: body.teamId });
});
