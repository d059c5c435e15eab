import * as desk from '$lib/server/desk';
import { forPage } from '$lib/server/http';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer } = await event.parent();
		const instant = new Date();
		const now = await desk.now(viewer, instant);
		return {
			now: { ...now, student: now.student.map((line) => ({ ...line, href: desk.workHref(line) })) },
			instant
		};
	});
