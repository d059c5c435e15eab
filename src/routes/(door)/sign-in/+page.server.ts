import { redirect } from '@sveltejs/kit';
import * as accounts from '$lib/server/accounts';
import { formFailure } from '$lib/server/http';
import { keepSession, localPath, visitorOf } from '$lib/server/requests';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, url }) => {
	if (locals.viewer) redirect(303, localPath(url.searchParams.get('next')));
	return { next: url.searchParams.get('next') };
};

export const actions: Actions = {
	default: async (event) => {
		const form = await event.request.formData();
		const email = String(form.get('email') ?? '');
		try {
			const given = { email, password: String(form.get('password') ?? '') };
			keepSession(event.cookies, await accounts.signIn(visitorOf(event), given));
		} catch (thrown) {
			return formFailure(thrown, { email });
		}
		redirect(303, localPath(event.url.searchParams.get('next')));
	}
};
