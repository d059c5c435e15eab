import { redirect } from '@sveltejs/kit';
import * as accounts from '$lib/server/accounts';
import { formFailure, forPage } from '$lib/server/http';
import { keepSession, visitorOf } from '$lib/server/requests';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => ({
	invitation: await forPage(event, () => accounts.invitationOf(event.params.token)),
	signedInAs: event.locals.viewer?.email ?? null
});

export const actions: Actions = {
	/** somebody new */
	begin: async (event) => {
		const form = Object.fromEntries(await event.request.formData());
		const { password: _, ...entered } = form;
		try {
			keepSession(event.cookies, await accounts.acceptInvitation(visitorOf(event), event.params.token, form));
		} catch (thrown) {
			return formFailure(thrown, entered);
		}
		redirect(303, '/now');
	},
	/** somebody signed in */
	accept: async (event) => {
		const viewer = event.locals.viewer;
		if (!viewer) redirect(303, `/sign-in?next=${encodeURIComponent(event.url.pathname)}`);
		try {
			await accounts.acceptInvitationAs({ viewer }, event.params.token);
		} catch (thrown) {
			return formFailure(thrown);
		}
		redirect(303, '/now');
	}
};
