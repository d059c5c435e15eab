import { redirect, type RequestEvent } from '@sveltejs/kit';
import * as accounts from '$lib/server/accounts';
import type { Act, Viewer } from '$lib/server/auth';
import { formFailure, forPage } from '$lib/server/http';
import { browserName } from './browser-name';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { viewer, session } = event.locals;
	const sessions = await forPage(event, () => accounts.sessionsOf(viewer as Viewer, session));
	return {
		sessions: sessions.map(({ client, ...rest }) => ({ ...rest, browser: browserName(client) })),
		trail: [{ label: 'Account', href: '/account', current: true }]
	};
};

/** Whoever posts here is signed in, or is sent to sign in. */
function actOf(event: RequestEvent): Act {
	if (!event.locals.viewer) redirect(303, '/sign-in?next=/account');
	return { viewer: event.locals.viewer };
}

export const actions: Actions = {
	profile: async (event) => {
		const entered = Object.fromEntries(await event.request.formData());
		try {
			const { name, initials } = await accounts.changeProfile(actOf(event), entered);
			return { part: 'profile', said: `Stored. Others read ${name}, ${initials}` };
		} catch (thrown) {
			return formFailure(thrown, entered);
		}
	},
	password: async (event) => {
		const given = Object.fromEntries(await event.request.formData());
		try {
			await accounts.changePassword(actOf(event), event.locals.session, given);
			return { part: 'password', said: 'Password changed. Every other device is signed out.' };
		} catch (thrown) {
			return formFailure(thrown);
		}
	}
};
