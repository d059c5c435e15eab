import { redirect } from '@sveltejs/kit';
import * as accounts from '$lib/server/accounts';
import { dropSession } from '$lib/server/requests';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
	if (!locals.viewer) redirect(303, '/sign-in');
	const { id, name } = locals.viewer;
	return { person: { id, name } };
};

export const actions: Actions = {
	here: async ({ locals, cookies }) => {
		if (locals.viewer && locals.session) await accounts.signOut({ viewer: locals.viewer }, locals.session);
		dropSession(cookies);
		redirect(303, '/sign-in');
	},
	everywhere: async ({ locals, cookies }) => {
		if (locals.viewer) await accounts.signOutEverywhere({ viewer: locals.viewer });
		dropSession(cookies);
		redirect(303, '/sign-in');
	}
};
