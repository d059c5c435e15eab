import type { Cookies, RequestEvent } from '@sveltejs/kit';
import type { Cookie } from 'lucia';
import { apiBase, operationAt } from '$lib/contracts/routes';
import type { Visitor } from './accounts';
import { blankCookie, sessionSecret } from './auth';
import { env } from './env';
import { notFound, Refusal } from './errors';
import { localPathOf } from './local-path';

/** Largest JSON body, bytes: a report's text or a table of 2,000 rows with its results is well below. */
const jsonLimit = 2 * 1024 * 1024;
/** Largest form: names and passwords. */
const formLimit = 16 * 1024;

const reads = new Set(['GET', 'HEAD', 'OPTIONS']);
/** What a form or a link of a foreign page can send without being asked first. */
const sentByForms = ['application/x-www-form-urlencoded', 'multipart/form-data', 'text/plain'];

export const isApi = (event: Pick<RequestEvent, 'url'>): boolean =>
	event.url.pathname === apiBase || event.url.pathname.startsWith(`${apiBase}/`);

/**
 * What a request must be before anybody looks at who sent it. Writes that carry the session's cookie come from our own
 * pages (Origin), are JSON, or raw bytes by PUT: nothing that a foreign page's form can send. Throws Refusal.
 */
export function mustBeOurs(event: RequestEvent): void {
	const { request } = event;
	// No address of ours has U+0000 in it; as a parameter it would only come back from the database as a fault.
	if (!isApi(event) && /%00/.test(event.url.pathname + event.url.search)) throw notFound();
	if (reads.has(request.method)) return;
	const type = (request.headers.get('content-type') ?? '').split(';')[0]?.trim().toLowerCase() ?? '';
	if (!isApi(event)) {
		mustTellLength(request);
		return mustFit(request, formLimit);
	}
	const withCookie = sessionSecret(request.headers.get('cookie')) !== null;
	if (withCookie && request.headers.get('origin') !== env().ORIGIN) {
		throw new Refusal('forbidden', 'This did not come from these pages. Open them and repeat it there.');
	}
	if (sentByForms.includes(type))
		throw new Refusal('unprocessable', 'Send JSON: content-type application/json.');
	const upload = operationAt(event.route.id, request.method)?.upload;
	if (upload && request.method === 'PUT') return mustFit(request, upload.maxBytes);
	if (type !== '' && type !== 'application/json')
		throw new Refusal('unprocessable', 'Send JSON: content-type application/json.');
	mustFit(request, jsonLimit);
	if (type === 'application/json') mustTellLength(request);
}

/** Browsers always do; a body sent in pieces would pass by the limit. */
function mustTellLength(request: Request): void {
	if (request.headers.has('transfer-encoding'))
		throw new Refusal('unprocessable', 'Send the length of the body: content-length.');
}

function mustFit(request: Request, limit: number): void {
	if (Number(request.headers.get('content-length') ?? 0) > limit) {
		throw new Refusal('too-large', `At most ${inWords(limit)} here.`);
	}
}

const inWords = (bytes: number) =>
	bytes >= 1024 * 1024 ? `${Math.floor(bytes / 1024 / 1024)} MB` : `${Math.floor(bytes / 1024)} kB`;

/** Headers every response carries beside the content policy that kit writes for pages. */
export function securityHeaders(event: RequestEvent): Record<string, string> {
	return {
		'x-content-type-options': 'nosniff',
		'referrer-policy': 'same-origin',
		'permissions-policy': 'camera=(self), geolocation=(), microphone=(), payment=(), usb=()',
		'cross-origin-opener-policy': 'same-origin',
		'x-frame-options': 'DENY',
		'x-request-id': event.locals.requestId,
		...(isApi(event) ? { 'content-security-policy': "default-src 'none'; frame-ancestors 'none'" } : {}),
		...(env().ORIGIN.startsWith('https:')
			? { 'strict-transport-security': 'max-age=31536000; includeSubDomains' }
			: {})
	};
}

/** Who asks, when nobody is signed in. */
export const visitorOf = (event: RequestEvent): Visitor => ({
	address: event.getClientAddress(),
	client: event.request.headers.get('user-agent') ?? ''
});

/** Puts a session into the browser. */
export const keepSession = (cookies: Cookies, cookie: Cookie): void =>
	cookies.set(cookie.name, cookie.value, { ...cookie.attributes, path: '/' });

/** Takes the session out of the browser. */
export const dropSession = (cookies: Cookies): void => keepSession(cookies, blankCookie());

/** Where to go after signing in: an address of ours, else the start. */
export const localPath = (next: string | null): string => localPathOf(env().ORIGIN, next);
