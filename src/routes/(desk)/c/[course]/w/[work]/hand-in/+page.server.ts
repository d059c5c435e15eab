import { forPage } from '$lib/server/http';
import * as reports from '$lib/server/reports';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer } = await event.parent();
		const sheet = await reports.openSheet(viewer, event.params.work);
		return { ...sheet, at: new Date().toISOString() };
	});
