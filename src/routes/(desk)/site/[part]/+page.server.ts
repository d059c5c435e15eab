import * as courses from '$lib/server/courses';
import { notFound } from '$lib/server/errors';
import { forPage } from '$lib/server/http';
import type { PageServerLoad } from './$types';

const parts = ['accounts', 'courses'] as const;
const pageSize = 100;

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer } = await event.parent();
		// Also the check: only administrators see the site's accounts.
		const accounts = await courses.accountsOfSite(viewer, { limit: pageSize });
		const part = parts.find((known) => known === event.params.part);
		if (!part) throw notFound();
		return {
			part,
			accounts,
			pageSize,
			courses: await courses.mine(viewer),
			trail: [{ label: 'Site', href: '/site/accounts' }]
		};
	});
