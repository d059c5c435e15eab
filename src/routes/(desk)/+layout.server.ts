import { redirect } from '@sveltejs/kit';
import type { LayoutServerLoad } from './$types';

/** Everything at the desk belongs to somebody; `hooks` turns strangers away before, here it becomes a type. */
export const load: LayoutServerLoad = ({ locals, url }) => {
	if (!locals.viewer) redirect(303, `/sign-in?next=${encodeURIComponent(url.pathname + url.search)}`);
	return { viewer: locals.viewer };
};
