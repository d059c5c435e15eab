import { redirect } from '@sveltejs/kit';
import * as accounts from '$lib/server/accounts';
import { formFailure, forPage } from '$lib/server/http';
import { keepSession, visitorOf } from '$lib/server/requests';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, () => accounts.verificationOf(event.params.token));

export const actions: Actions = {
	default: async (event) => {
		const password = String((await event.request.formData()).get('password') ?? '');
		try {
			const cookie = await accounts.verifyEmail(visitorOf(event), event.params.token, { password });
			keepSession(event.cookies, cookie);
		} catch (thrown) {
			return formFailure(thrown);
		}
		redirect(303, '/now');
	}
};
