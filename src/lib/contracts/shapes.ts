import { z } from 'zod';

/** Building blocks of the contracts. */
export const uuid = z.uuid();
/** An instant, ISO 8601 in UTC. */
export const instant = z.iso.datetime();
/** 'YYYY-MM-DDTHH:MM' in the course's zone. */
export const wallClock = z.string().regex(/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}(:\d{2})?$/);

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
