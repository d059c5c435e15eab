import type { z } from 'zod';

/**
 * One operation of the API, written by hand. The pages import only types from here, so that the schemas stay on the server.
 * `path` is below /api/v1, with parameters in braces.
 */
export interface Operation<
	Params extends z.ZodType = z.ZodType,
	Query extends z.ZodType = z.ZodType,
	Body extends z.ZodType = z.ZodType,
	Response extends z.ZodType = z.ZodType
> {
	id: string;
	method: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';
	path: string;
	summary: string;
	/** 'anyone' needs no session */
	access: 'anyone' | 'signed-in';
	params?: Params;
	query?: Query;
	body?: Body;
	/** absent: 204 without a body */
	response?: Response;
	/** 200 unless said otherwise */
	status?: 200 | 201;
	/** takes an Idempotency-Key; a repeated request gets the first answer */
	repeatable?: true;
	/** takes If-Match with the revision seen */
	conditional?: true;
	/** raw bytes instead of JSON */
	upload?: { maxBytes: number };
	/** the response is not JSON (a file, CSV) */
	media?: string;
}

/** Identity with inference. */
export function operation<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, R extends z.ZodType>(
	definition: Operation<P, Q, B, R>
): Operation<P, Q, B, R> {
	return definition;
}

export type ResponseOf<O> =
	O extends Operation<z.ZodType, z.ZodType, z.ZodType, infer R> ? z.output<R> : never;
export type BodyOf<O> = O extends Operation<z.ZodType, z.ZodType, infer B, z.ZodType> ? z.input<B> : never;
export type ParamsOf<O> = O extends Operation<infer P, z.ZodType, z.ZodType, z.ZodType> ? z.input<P> : never;
export type QueryOf<O> = O extends Operation<z.ZodType, infer Q, z.ZodType, z.ZodType> ? z.input<Q> : never;
