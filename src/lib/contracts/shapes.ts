import { z } from 'zod';

/** Building blocks of the contracts. */
export const uuid = z.uuid();
/** An instant, ISO 8601 in UTC. */
export const instant = z.iso.datetime();
/** 'YYYY-MM-DDTHH:MM' in the course's zone. */
export const wallClock = z
	.string()
	.regex(/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}(:[0-5]\d)?$/, 'Wanted: year-month-dayThour:minute.')
	.refine(isOnTheCalendar, 'There is no such day or time.');

/** Of this age: the 45th of a month and the year 0 are turned away, the 29th of February has its year. */
function isOnTheCalendar(text: string): boolean {
	const minute = text.slice(0, 16);
	const at = new Date(`${minute}:00Z`);
	return (
		!Number.isNaN(at.getTime()) && at.toISOString().startsWith(minute) && minute >= '1970' && minute < '3000'
	);
}

/** What stands on one line: no line breaks or other controls, nor signs that turn the direction of what follows. */
export const line = z
	.string()
	.trim()
	.regex(/^[^\p{Cc}\u2028\u2029\u202A-\u202E\u2066-\u2069]*$/u, 'On one line, without control signs.');

/** Keyset page: `after` is the cursor of the last item seen. */
export const pageQuery = z.object({
	after: z.string().max(200).optional(),
	limit: z.coerce.number().int().min(1).max(200).default(50)
});
export const page = <T extends z.ZodType>(item: T) =>
	z.object({ items: z.array(item), next: z.string().nullable() });

/** Problem details, RFC 9457. */
export const problem = z.object({
	type: z.string(),
	title: z.string(),
	status: z.number().int(),
	detail: z.string().optional(),
	/** stands in the log */
	id: z.string().optional(),
	fields: z.record(z.string(), z.string()).optional()
});
export type ProblemDetails = z.infer<typeof problem>;
