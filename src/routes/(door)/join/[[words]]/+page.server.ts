import { redirect } from '@sveltejs/kit';
import * as accounts from '$lib/server/accounts';
import { Refusal } from '$lib/server/errors';
import { formFailure } from '$lib/server/http';
import { visitorOf } from '$lib/server/requests';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const typed = event.url.searchParams.get('words');
	if (typed) redirect(303, `/join/${accounts.spelledWords(typed)}`);
	const signedInAs = event.locals.viewer?.name ?? null;
	const words = event.params.words;
	if (!words) return { signedInAs, words: '', section: null, problem: null };
	try {
		const section = await accounts.sectionAhead(visitorOf(event), words);
		return { signedInAs, words: section.words, section, problem: null };
	} catch (thrown) {
		if (!(thrown instanceof Refusal)) throw thrown;
		return { signedInAs, words, section: null, problem: thrown.message };
	}
};

export const actions: Actions = {
	/** somebody new */
	begin: async (event) => {
		const form = Object.fromEntries(await event.request.formData());
		const { password: _, ...entered } = form;
		try {
			await accounts.requestJoin(visitorOf(event), { ...form, words: event.params.words ?? '' });
		} catch (thrown) {
			return formFailure(thrown, entered);
		}
		return { mailedTo: String(form['email'] ?? '').trim() };
	},
	/** somebody signed in */
	join: async (event) => {
		const viewer = event.locals.viewer;
		if (!viewer) redirect(303, `/sign-in?next=${encodeURIComponent(event.url.pathname)}`);
		let slug: string;
		try {
			({ slug } = await accounts.joinByWords({ viewer }, { words: event.params.words ?? '' }));
		} catch (thrown) {
			return formFailure(thrown);
		}
		redirect(303, `/c/${slug}`);
	}
};
