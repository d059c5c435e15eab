import { error } from '@sveltejs/kit';
import { forPage } from '$lib/server/http';
import * as marking from '$lib/server/marking';
import type { PageServerLoad } from './$types';

const leaves = { readings: 'Readings', workings: 'Workings', report: 'Report' } as const;
type Leaf = keyof typeof leaves;
const isLeaf = (text: string): text is Leaf => Object.hasOwn(leaves, text);

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, course, trail } = await event.parent();
		const { alias, sheet: leaf } = event.params;
		if (!isLeaf(leaf)) error(404, 'Not here, or not yours to see.');
		const sheet = await marking.openSheet(viewer, { course: course.slug, alias });
		const base = `/c/${course.slug}/sitting`;
		return {
			leaf,
			sheet,
			trail: [
				...(trail ?? []),
				{ label: 'Sitting', href: base },
				{ label: sheet.author ?? sheet.label, href: `${base}/${alias}/report` }
			],
			sheets: Object.entries(leaves).map(([name, label]) => ({
				label,
				href: `${base}/${alias}/${name}`,
				current: name === leaf
			}))
		};
	});
