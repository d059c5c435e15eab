import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.listCourses, async ({ viewer }) => ({
	items: await courses.mine(viewer)
}));

export const POST = endpoint(contracts.addCourse, ({ act, body }) => courses.addCourse(act, body));
