import type { BodyOf, Operation, ParamsOf, ProblemDetails, QueryOf, ResponseOf } from '$lib/contracts';

/** What the API said instead of doing it: RFC 9457, with the sentence to show in `detail`. */
export class ApiProblem extends Error {
	constructor(readonly details: ProblemDetails) {
		super(details.detail ?? details.title);
		this.name = 'ApiProblem';
	}
	get status(): number {
		return this.details.status;
	}
	/** field path -> what is wrong and what to do */
	get fields(): Record<string, string> {
		return this.details.fields ?? {};
	}
}

/** The network did not carry it. What was sent may or may not have arrived: repeat it with the same key. */
export class Unreachable extends Error {
	constructor(cause: unknown) {
		super('No answer. Check the connection, then try again.', { cause });
		this.name = 'Unreachable';
	}
}

export interface RequestOptions<O> {
	params?: ParamsOf<O>;
	query?: QueryOf<O>;
	body?: BodyOf<O>;
	/** makes the call repeatable: the same key gets the first answer */
	idempotencyKey?: string;
	/** the revision seen: the call is refused when somebody was faster */
	revision?: number;
	signal?: AbortSignal;
	/** kit's own, in `load` */
	fetch?: typeof fetch;
}

type AnyOperation = Operation<never, never, never, never> | Operation;

/** Waits between repeats of a call that may be repeated, ms. */
const pauses = [300, 1200, 4000];
/** A proxy's answer while a process restarts. */
const passing = new Set([502, 503, 504]);

/** `path` with its parameters filled in: "/reports/{report}" below /api/v1. */
export function addressOf(path: string, params: unknown = {}, query: unknown = {}): string {
	const given = params as Record<string, unknown>;
	const filled = path.replace(/\{(\w+)\}/g, (_, name: string) => {
		const value = given[name];
		if (value === undefined) throw new Error(`${path} wants ${name}`);
		return encodeURIComponent(String(value));
	});
	const search = new URLSearchParams();
	for (const [name, value] of Object.entries(query as Record<string, unknown>)) {
		if (value !== undefined && value !== null) search.set(name, String(value));
	}
	const tail = search.toString();
	return `/api/v1${filled}${tail ? `?${tail}` : ''}`;
}

/**
 * One call of the API, typed by its contract: `request<typeof reports.handIn>('POST', '/reports/{report}/snapshots', …)`.
 * Reads, and writes with an idempotency key, are repeated when the network fails. Throws {@link ApiProblem} for what the
 * server refused, {@link Unreachable} when there was no answer.
 */
export async function request<O = AnyOperation>(
	method: Operation['method'],
	path: string,
	options: RequestOptions<O> = {}
): Promise<ResponseOf<O>> {
	const headers = new Headers({ accept: 'application/json, application/problem+json' });
	if (options.body !== undefined) headers.set('content-type', 'application/json');
	if (options.idempotencyKey) headers.set('idempotency-key', options.idempotencyKey);
	if (options.revision !== undefined) headers.set('if-match', `"${options.revision}"`);
	const mayRepeat = method === 'GET' || options.idempotencyKey !== undefined;
	return send<ResponseOf<O>>(
		options.fetch ?? fetch,
		addressOf(path, options.params, options.query),
		{
			method,
			headers,
			...(options.body === undefined ? {} : { body: JSON.stringify(options.body) }),
			...(options.signal ? { signal: options.signal } : {})
		},
		mayRepeat ? pauses : []
	);
}

/** Sends a file's bytes as they are. `type` tells the server what they claim to be. */
export async function upload<O = AnyOperation>(
	path: string,
	file: Blob,
	options: Omit<RequestOptions<O>, 'body'> & { type?: string } = {}
): Promise<ResponseOf<O>> {
	const headers = new Headers({
		accept: 'application/json, application/problem+json',
		'content-type': options.type || 'application/octet-stream'
	});
	if (options.idempotencyKey) headers.set('idempotency-key', options.idempotencyKey);
	return send<ResponseOf<O>>(
		options.fetch ?? fetch,
		addressOf(path, options.params, options.query),
		{ method: 'PUT', headers, body: file, ...(options.signal ? { signal: options.signal } : {}) },
		options.idempotencyKey ? pauses : []
	);
}

async function send<T>(
	call: typeof fetch,
	address: string,
	init: RequestInit,
	waits: readonly number[]
): Promise<T> {
	for (let turn = 0; ; turn++) {
		const wait = waits[turn];
		let response: Response;
		try {
			response = await call(address, init);
		} catch (thrown) {
			if (init.signal?.aborted) throw thrown;
			if (wait === undefined) throw new Unreachable(thrown);
			await pause(wait);
			continue;
		}
		if (passing.has(response.status) && wait !== undefined) {
			await pause(wait);
			continue;
		}
		if (!response.ok) throw new ApiProblem(await detailsOf(response));
		const type = response.headers.get('content-type') ?? '';
		if (response.status === 204) return undefined as T;
		return (type.includes('json') ? await response.json() : await response.text()) as T;
	}
}

const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));

async function detailsOf(response: Response): Promise<ProblemDetails> {
	const type = response.headers.get('content-type') ?? '';
	if (type.includes('problem+json')) return (await response.json()) as ProblemDetails;
	return {
		type: 'about:blank',
		title: `The server answered ${response.status}`,
		status: response.status,
		detail: 'This did not work. Try again; if it stays, tell staff.'
	};
}
