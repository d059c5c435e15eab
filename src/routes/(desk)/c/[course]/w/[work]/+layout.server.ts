import * as courses from '$lib/server/courses';
import { forPage } from '$lib/server/http';
import type { LayoutServerLoad } from './$types';

const sheets = [
	{ label: 'Readings', leaf: 'bench' },
	{ label: 'Workings', leaf: 'workings' },
	{ label: 'Report', leaf: 'report' },
	{ label: 'Hand in', leaf: 'hand-in' },
	{ label: 'Returned', leaf: 'returned' }
];

export const load: LayoutServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, trail } = await event.parent();
		const work = await courses.workOf(viewer, event.params.work);
		const base = `/c/${work.course.slug}/w/${work.id}`;
		// Staff look at readings and workings; a report is its author's until it is handed in.
		const shown = work.own ? sheets : sheets.slice(0, 2);
		return {
			work,
			trail: [...(trail ?? []), { label: work.title, href: `${base}/${work.own ? 'report' : 'bench'}` }],
			sheets: shown.map(({ label, leaf }) => ({
				label,
				href: `${base}/${leaf}`,
				current: event.url.pathname.endsWith(`/${leaf}`)
			}))
		};
	});
