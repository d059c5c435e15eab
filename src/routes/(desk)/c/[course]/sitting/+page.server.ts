import { forPage } from '$lib/server/http';
import * as marking from '$lib/server/marking';
import type { PageServerLoad } from './$types';

/**
 * The sitting of the assignment asked for, or of the first that waits. Opening draws the order where there is none yet and
 * adds what came in since; doing that again changes nothing, so a page that is only looked ahead to does no harm.
 */
export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, course, trail } = await event.parent();
		const toMark = await marking.tonight(viewer, course.id);
		const asked = event.url.searchParams.get('assignment');
		const chosen =
			toMark.find((one) => one.assignment === asked) ?? toMark.find((one) => one.waiting > 0) ?? toMark[0];
		return {
			toMark,
			sitting: chosen ? await marking.openSitting({ viewer }, { assignment: chosen.assignment }) : null,
			trail: [...(trail ?? []), { label: 'Sitting', href: `/c/${course.slug}/sitting`, current: true }]
		};
	});
