import { forPage } from '$lib/server/http';
import * as moderation from '$lib/server/moderation';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, course, trail } = await event.parent();
		return {
			returning: await moderation.readReturning(viewer, course.id),
			trail: [...(trail ?? []), { label: 'Returning', href: `/c/${course.slug}/returning`, current: true }]
		};
	});
