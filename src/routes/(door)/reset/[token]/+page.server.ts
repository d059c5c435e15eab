import { redirect } from '@sveltejs/kit';
import * as accounts from '$lib/server/accounts';
import { formFailure, forPage } from '$lib/server/http';
import { keepSession, visitorOf } from '$lib/server/requests';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = (event) => forPage(event, () => accounts.resetOf(event.params.token));

export const actions: Actions = {
	default: async (event) => {
		const password = String((await event.request.formData()).get('password') ?? '');
		try {
			keepSession(event.cookies, await accounts.reset(visitorOf(event), event.params.token, { password }));
		} catch (thrown) {
			return formFailure(thrown);
		}
		redirect(303, '/now');
	}
};
