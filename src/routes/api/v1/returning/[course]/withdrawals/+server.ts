import { moderation as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';
import * as moderation from '$lib/server/moderation';

export const POST = endpoint(contracts.withdrawReturn, async ({ act, viewer, params, body }) => {
	const course = await courses.open(viewer, params.course);
	return moderation.withdrawReturn(act, { courseId: course.id, ...body });
});
