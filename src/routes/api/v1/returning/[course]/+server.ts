import { moderation as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';
import * as moderation from '$lib/server/moderation';

export const GET = endpoint(contracts.readReturning, async ({ viewer, params }) => {
	const course = await courses.open(viewer, params.course);
	return moderation.readReturning(viewer, course.id);
});

export const POST = endpoint(contracts.returnReports, async ({ act, viewer, params, body }) => {
	const course = await courses.open(viewer, params.course);
	return moderation.returnReports(act, { courseId: course.id, ...body });
});
