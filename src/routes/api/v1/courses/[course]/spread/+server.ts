import { moderation as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';
import * as moderation from '$lib/server/moderation';

export const GET = endpoint(contracts.readSpread, async ({ viewer, params, query }) => {
	const course = await courses.open(viewer, params.course);
	return moderation.readSpread(viewer, { courseId: course.id, ...query });
});
