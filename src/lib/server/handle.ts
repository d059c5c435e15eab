import { redirect, type Handle, type HandleServerError, type RequestEvent } from '@sveltejs/kit';
import { v7 as uuidv7 } from 'uuid';
import { readSession, type OpenSession } from './auth';
import { Refusal } from './errors';
import { problemOf, problemResponse } from './http';
import { logger } from './logger';
import { isApi, keepSession, mustBeOurs, securityHeaders } from './requests';

/** What every request passes: who asks, whether it is ours, and the headers of the answer. */
export const handle: Handle = async ({ event, resolve }) => {
	event.locals.requestId = uuidv7();
	event.locals.viewer = null;
	event.locals.session = null;
	const response = await answer(event, resolve);
	for (const [name, value] of Object.entries(securityHeaders(event))) response.headers.set(name, value);
	return response;
};

async function answer(event: RequestEvent, resolve: Parameters<Handle>[0]['resolve']): Promise<Response> {
	try {
		mustBeOurs(event);
		remember(event, await readSession(event.request.headers.get('cookie')));
	} catch (thrown) {
		const { details, headers } = problemOf(thrown, event.locals.requestId);
		return problemResponse(details, headers);
	}
	if (event.route.id?.startsWith('/(desk)') && !event.locals.viewer) {
		redirect(303, `/sign-in?next=${encodeURIComponent(event.url.pathname + event.url.search)}`);
	}
	const theme = event.locals.viewer?.theme ?? 'system';
	const response = await resolve(event, {
		transformPageChunk: ({ html }) =>
			theme === 'system' ? html : html.replace('<html lang="en"', `<html lang="en" data-theme="${theme}"`)
	});
	return isApi(event) ? asProblem(event, response) : personal(event, withStyleNonce(response));
}

function remember(event: RequestEvent, open: OpenSession | null): void {
	if (!open) return;
	event.locals.viewer = open.viewer;
	event.locals.session = open.session;
	// Use moves the expiry on; the browser has to learn of it.
	if (open.cookie) keepSession(event.cookies, open.cookie);
}

/** Kit answers a method that a route lacks in plain text. */
function asProblem(event: RequestEvent, response: Response): Response {
	if (response.status !== 405) return response;
	const { details } = problemOf(
		new Refusal('not-found', 'This address does not take that method.'),
		event.locals.requestId
	);
	return problemResponse({ ...details, status: 405 }, { allow: response.headers.get('allow') ?? '' });
}

/**
 * The section editor makes style elements with the page's nonce; kit lets that in only where it inlined styles itself.
 * In development styles come without one, and a nonce beside 'unsafe-inline' would shut them out.
 */
function withStyleNonce(response: Response): Response {
	const policy = response.headers.get('content-security-policy');
	const nonce = policy && /'nonce-[^']+'/.exec(policy)?.[0];
	if (policy && nonce && !/style-src-elem[^;]*'(nonce-|unsafe-inline)/.test(policy)) {
		response.headers.set(
			'content-security-policy',
			policy.replace("style-src-elem 'self'", `style-src-elem 'self' ${nonce}`)
		);
	}
	return response;
}

/** What a signed-in person sees is kept by no cache on the way. */
function personal(event: RequestEvent, response: Response): Response {
	if (event.locals.viewer && !response.headers.has('cache-control'))
		response.headers.set('cache-control', 'private, no-cache');
	return response;
}

export const handleError: HandleServerError = ({ error, event, status, message }) => {
	const id = event.locals.requestId;
	if (status === 404) return { message: 'Not here, or not yours to see.', id };
	logger.error({ err: error, id, route: event.route.id, status }, message);
	return { message: 'This did not work, and it is ours to mend. Nothing you entered was lost.', id };
};
