import { error } from '@sveltejs/kit';
import { forPage } from '$lib/server/http';
import * as moderation from '$lib/server/moderation';
import type { PageServerLoad } from './$types';

const uuid = /^[0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i;

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, course, trail } = await event.parent();
		const assignment = event.url.searchParams.get('assignment') ?? undefined;
		if (assignment !== undefined && !uuid.test(assignment)) error(404, 'Not here, or not yours to see.');
		return {
			spread: await moderation.readSpread(viewer, { courseId: course.id, assignment }),
			trail: [...(trail ?? []), { label: 'Spread', href: `/c/${course.slug}/spread`, current: true }]
		};
	});
