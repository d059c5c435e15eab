import { error, fail, json, type RequestEvent, type RequestHandler } from '@sveltejs/kit';
import { z } from 'zod';
import type { Operation, ProblemDetails } from '$lib/contracts';
import type { Act, Viewer } from './auth';
import { mustBeStorable, requestDigest } from './db';
import { Refusal, type RefusalKind } from './errors';
import { logger } from './logger';

/** The only place that turns refusals into HTTP. */
const statuses: Record<RefusalKind, { status: number; title: string }> = {
	unauthenticated: { status: 401, title: 'Sign in first' },
	forbidden: { status: 403, title: 'Not yours to change' },
	'not-found': { status: 404, title: 'Not here, or not yours to see' },
	unprocessable: { status: 422, title: 'Something in this does not hold' },
	conflict: { status: 409, title: 'In another state by now' },
	stale: { status: 412, title: 'Changed in the meantime' },
	'too-late': { status: 409, title: 'Too late' },
	'too-many': { status: 429, title: 'Too many tries' },
	'too-large': { status: 413, title: 'Too large' },
	unavailable: { status: 503, title: 'Not reachable just now' }
};

const problemMedia = { 'content-type': 'application/problem+json' };

export function problemResponse(details: ProblemDetails, headers: Record<string, string> = {}): Response {
	return json(details, { status: details.status, headers: { ...problemMedia, ...headers } });
}

/** Problem details of anything thrown; the unexpected is logged under an id and shows no inside. */
export function problemOf(
	thrown: unknown,
	requestId: string
): { details: ProblemDetails; headers: Record<string, string> } {
	if (thrown instanceof Refusal) {
		const { status, title } = statuses[thrown.kind];
		const { fields, retryAfter, extra } = thrown.detail;
		return {
			details: {
				type: `urn:meniscus:${thrown.kind}`,
				title,
				status,
				detail: thrown.message,
				...(fields && { fields }),
				...extra
			},
			headers: retryAfter === undefined ? {} : { 'retry-after': String(Math.ceil(retryAfter)) }
		};
	}
	logger.error({ err: thrown, id: requestId }, 'unexpected');
	return {
		details: {
			type: 'urn:meniscus:unexpected',
			title: 'This did not work, and it is ours to mend',
			status: 500,
			detail: 'Nothing you entered was lost. Try again; if it stays, tell staff this number.',
			id: requestId
		},
		headers: {}
	};
}

function parse<S extends z.ZodType>(schema: S | undefined, value: unknown, where: string): z.output<S> {
	if (!schema) return undefined as z.output<S>;
	mustBeStorable(value, where);
	const result = schema.safeParse(value);
	if (result.success) return result.data;
	const fields: Record<string, string> = {};
	for (const issue of result.error.issues) fields[issue.path.join('.') || where] ??= issue.message;
	throw new Refusal('unprocessable', `Look at: ${Object.keys(fields).join(', ')}.`, { fields });
}

export interface Call<P, Q, B> {
	params: P;
	query: Q;
	body: B;
	event: RequestEvent;
}
export type SignedInCall<P, Q, B> = Call<P, Q, B> & { act: Act; viewer: Viewer };

type Output<R extends z.ZodType> = z.input<R> | Response;

async function readBody(
	event: RequestEvent,
	operation: Operation
): Promise<{ parsed: unknown; text: string }> {
	if (!operation.body) return { parsed: undefined, text: '' };
	const type = event.request.headers.get('content-type') ?? '';
	if (!type.startsWith('application/json')) {
		throw new Refusal('unprocessable', 'Send JSON: content-type application/json.');
	}
	const text = await event.request.text();
	try {
		return { parsed: JSON.parse(text), text };
	} catch {
		throw new Refusal('unprocessable', 'The body is not JSON.');
	}
}

function revisionOf(event: RequestEvent): number | undefined {
	const header = event.request.headers.get('if-match');
	if (header === null) return undefined;
	const match = /^"?(\d{1,9})"?$/.exec(header.trim());
	if (!match) throw new Refusal('unprocessable', 'If-Match wants the revision as a number in quotes.');
	return Number(match[1]);
}

function respond<R extends z.ZodType>(operation: Operation, result: Output<R> | undefined): Response {
	if (result instanceof Response) return result;
	if (!operation.response) return new Response(null, { status: 204 });
	// The schema drops every field it does not name: a new column never leaks by itself.
	const shown = operation.response.parse(result);
	const headers: Record<string, string> = { 'cache-control': 'no-store' };
	if (typeof shown === 'object' && shown !== null && 'revision' in shown)
		headers.etag = `"${String(shown.revision)}"`;
	return json(shown, { status: operation.status ?? 200, headers });
}

/**
 * A route script in three steps: who is asking, one call of a verb, the response.
 * `operation.access` decides which of the two forms the handler gets.
 */
export function endpoint<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, R extends z.ZodType>(
	operation: Operation<P, Q, B, R>,
	handle: (call: SignedInCall<z.output<P>, z.output<Q>, z.output<B>>) => Promise<Output<R>> | Promise<void>
): RequestHandler {
	return async (event) => {
		try {
			const viewer = event.locals.viewer;
			if (!viewer && operation.access === 'signed-in')
				throw new Refusal('unauthenticated', 'Sign in, then repeat.');
			const params = parse(operation.params, event.params, 'address');
			const query = parse(operation.query, Object.fromEntries(event.url.searchParams), 'query');
			const { parsed, text } = await readBody(event, operation);
			const body = parse(operation.body, parsed, 'body');
			const key = event.request.headers.get('idempotency-key');
			const act = {
				viewer: viewer as Viewer,
				...(operation.repeatable && key && viewer
					? {
							repeatable: {
								userId: viewer.id,
								key: key.slice(0, 200),
								requestSha256: requestDigest(operation.method, event.url.pathname, text)
							}
						}
					: {}),
				...(operation.conditional ? { revision: revisionOf(event) } : {})
			} as Act;
			const result = await handle({ params, query, body, event, act, viewer: viewer as Viewer });
			return respond<R>(operation as unknown as Operation, result as Output<R> | undefined);
		} catch (thrown) {
			const { details, headers } = problemOf(thrown, event.locals.requestId);
			return problemResponse(details, headers);
		}
	};
}

/** For `load`: runs a verb and turns its refusals into kit's error pages. */
export async function forPage<T>(event: { locals: App.Locals }, call: () => Promise<T>): Promise<T> {
	try {
		return await call();
	} catch (thrown) {
		if (!(thrown instanceof Refusal)) throw thrown;
		const { status } = statuses[thrown.kind];
		error(status, { message: thrown.message, id: event.locals.requestId });
	}
}

/** For form actions: the refusal beside what was entered (never a password). */
export function formFailure(thrown: unknown, entered: Record<string, unknown> = {}) {
	if (!(thrown instanceof Refusal)) throw thrown;
	return fail(statuses[thrown.kind].status, {
		message: thrown.message,
		fields: thrown.detail.fields ?? {},
		entered
	});
}
