import { marking as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const GET = endpoint(contracts.listKeptRemarks, async ({ viewer, params }) => {
	const course = await courses.open(viewer, params.course);
	return { items: await marking.listKeptRemarks(viewer, course.id) };
});

export const POST = endpoint(contracts.keepRemark, async ({ act, viewer, params, body }) => {
	const course = await courses.open(viewer, params.course);
	return marking.keepRemark(act, { courseId: course.id, ...body });
});
