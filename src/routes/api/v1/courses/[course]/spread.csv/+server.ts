import { moderation as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';
import * as moderation from '$lib/server/moderation';

export const GET = endpoint(contracts.spreadTable, async ({ viewer, params, query }) => {
	const course = await courses.open(viewer, params.course);
	const { fileName, text } = await moderation.spreadTable(viewer, { courseId: course.id, ...query });
	return new Response(text, {
		headers: {
			'content-type': 'text/csv; charset=utf-8',
			'content-disposition': `attachment; filename="${fileName}"`,
			'cache-control': 'no-store'
		}
	});
});
