import { forPage } from '$lib/server/http';
import * as marking from '$lib/server/marking';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, work } = await event.parent();
		return { returned: await marking.returned(viewer, work.id) };
	});
