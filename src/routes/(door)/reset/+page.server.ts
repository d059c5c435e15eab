import * as accounts from '$lib/server/accounts';
import { formFailure } from '$lib/server/http';
import { visitorOf } from '$lib/server/requests';
import type { Actions } from './$types';

export const actions: Actions = {
	default: async (event) => {
		const email = String((await event.request.formData()).get('email') ?? '');
		try {
			await accounts.requestReset(visitorOf(event), { email });
		} catch (thrown) {
			return formFailure(thrown, { email });
		}
		return { asked: email.trim() };
	}
};
