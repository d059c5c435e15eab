import * as desk from '$lib/server/desk';
import { forPage } from '$lib/server/http';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer } = await event.parent();
		return { now: await desk.now(viewer, new Date()) };
	});
