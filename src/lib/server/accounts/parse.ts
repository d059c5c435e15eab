import type { z } from 'zod';
import { unprocessable } from '../errors';
import { mustBeStorable } from '../db';

/** Input as its schema reads it; throws Refusal 'unprocessable' with one sentence for each field that does not hold. */
export function parse<S extends z.ZodType>(schema: S, input: unknown): z.output<S> {
	mustBeStorable(input, 'form');
	const result = schema.safeParse(input);
	if (result.success) return result.data;
	const fields: Record<string, string> = {};
	for (const issue of result.error.issues) fields[issue.path.join('.')] ??= issue.message;
	throw unprocessable('Look at what is marked below.', fields);
}
