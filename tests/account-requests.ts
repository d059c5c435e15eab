import type { Cookies, RequestEvent, RequestHandler } from '@sveltejs/kit';
import { handle } from '../src/lib/server/handle';

export interface Sent {
	method?: string;
	/** of the route, with its parameters: /api/v1/courses/[course]/invitations */
	route: string;
	params?: Record<string, string>;
	/** cookie header */
	cookie?: string;
	headers?: Record<string, string>;
	body?: unknown;
	/** network address */
	address?: string;
}

const origin = () => process.env['ORIGIN'] ?? 'http://127.0.0.1';

/** A request as a page of ours sends it, through everything a request passes, to one route's handler. */
export async function send(handler: RequestHandler, sent: Sent): Promise<Response> {
	const path = sent.route.replace(/\[(\w+)\]/g, (_, name: string) => sent.params?.[name] ?? '');
	const body = typeof sent.body === 'string' ? sent.body : JSON.stringify(sent.body);
	const headers = new Headers({
		origin: origin(),
		...(sent.body === undefined
			? {}
			: { 'content-type': 'application/json', 'content-length': String(Buffer.byteLength(body ?? '')) }),
		...(sent.cookie ? { cookie: sent.cookie } : {})
	});
	for (const [name, value] of Object.entries(sent.headers ?? {})) {
		if (value === '') headers.delete(name);
		else headers.set(name, value);
	}
	const request = new Request(new URL(path, origin()), {
		method: sent.method ?? 'GET',
		headers,
		...(sent.body === undefined ? {} : { body })
	});
	const set: Record<string, string> = {};
	const event = {
		request,
		url: new URL(request.url),
		route: { id: sent.route },
		params: sent.params ?? {},
		locals: {},
		cookies: { set: (name: string, value: string) => (set[name] = value) } as unknown as Cookies,
		getClientAddress: () => sent.address ?? '127.0.0.1'
	} as unknown as RequestEvent;
	const response = await handle({ event, resolve: async (resolved) => handler(resolved) });
	for (const [name, value] of Object.entries(set)) response.headers.append('set-cookie', `${name}=${value}`);
	return response;
}

/** Waits until `look` finds something; fails after `patience` ms. */
export async function until<T>(
	look: () => Promise<T | undefined | null | false>,
	patience = 15_000
): Promise<T> {
	const deadline = Date.now() + patience;
	for (;;) {
		const found = await look();
		if (found) return found;
		if (Date.now() > deadline) throw new Error('it did not come');
		await new Promise((resolve) => setTimeout(resolve, 100));
	}
}
