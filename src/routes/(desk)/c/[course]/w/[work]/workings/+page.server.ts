import { forPage } from '$lib/server/http';
import * as readings from '$lib/server/readings';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer } = await event.parent();
		return { bench: await readings.openBench(viewer, event.params.work) };
	});
