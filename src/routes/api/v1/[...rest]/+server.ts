import type { RequestHandler } from '@sveltejs/kit';
import { notFound } from '$lib/server/errors';
import { problemOf, problemResponse } from '$lib/server/http';

/** Addresses the API does not have are refused in its own form. */
export const fallback: RequestHandler = ({ locals }) =>
	problemResponse(problemOf(notFound(), locals.requestId).details);
