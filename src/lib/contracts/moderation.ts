import { z } from 'zod';
import { slug } from './courses';
import { operation } from './operation';
import { instant, uuid } from './shapes';

/** A report on its way back. Points in hundredths. */
const returningReport = z.object({
	id: uuid,
	assignment: uuid,
	labSection: z.string(),
	team: z.string(),
	author: z.string(),
	state: z.enum(['unmarked', 'begun', 'ready', 'returned']),
	marker: z.string().nullable(),
	points: z.number().int().nullable(),
	deduction: z.number().int().nullable(),
	maximum: z.number().int(),
	/** the late rule in words, empty when on time */
	rule: z.string(),
	returnedAt: instant.nullable(),
	/** until when the return can be taken back; null when it no longer can */
	undoUntil: instant.nullable()
});

const returning = z.object({
	zone: z.string(),
	assignments: z.array(z.object({ id: uuid, title: z.string() })),
	reports: z.array(returningReport)
});

const chosen = z.object({
	reports: z.array(uuid).min(1, 'Choose at least one report.').max(500, 'At most 500 at once.')
});

/** Five numbers and two moments of a group's totals, in points. */
const summary = z.object({
	n: z.number().int(),
	mean: z.number().nullable(),
	standardDeviation: z.number().nullable(),
	minimum: z.number().nullable(),
	lowerQuartile: z.number().nullable(),
	median: z.number().nullable(),
	upperQuartile: z.number().nullable(),
	maximum: z.number().nullable()
});
const group = z.object({ name: z.string(), values: z.array(z.number()), summary });

const spread = z.object({
	assignment: z.object({ id: uuid, title: z.string() }).nullable(),
	assignments: z.array(z.object({ id: uuid, title: z.string() })),
	/** the most a report can get, in points */
	maximum: z.number(),
	handedIn: z.number().int(),
	sentence: z.string(),
	all: group,
	sections: z.array(group),
	graders: z.array(group),
	criteria: z.array(
		z.object({
			id: uuid,
			title: z.string(),
			levels: z.array(
				z.object({
					level: z.number().int(),
					text: z.string(),
					/** how many reports of each group got it; groups in the order of `sections` and `graders` */
					all: z.number().int(),
					sections: z.array(z.number().int()),
					graders: z.array(z.number().int())
				})
			)
		})
	)
});

export type ReturningShape = z.output<typeof returning>;
export type ReturningReport = z.output<typeof returningReport>;
export type SpreadShape = z.output<typeof spread>;
export type SpreadGroup = z.output<typeof group>;
export type SpreadSummary = z.output<typeof summary>;

export const readReturning = operation({
	id: 'readReturning',
	method: 'GET',
	path: '/returning/{course}',
	summary: 'Handed-in reports of a course with what stands between them and their return',
	access: 'signed-in',
	params: z.object({ course: slug }),
	response: returning
});

export const returnReports = operation({
	id: 'returnReports',
	method: 'POST',
	path: '/returning/{course}',
	summary: 'Return marked reports to their authors, with a mail to each; all or none',
	access: 'signed-in',
	repeatable: true,
	params: z.object({ course: slug }),
	body: chosen,
	response: z.object({
		returned: z.array(uuid),
		/** were back with their authors already */
		already: z.array(uuid),
		students: z.number().int(),
		undoUntil: instant
	})
});

export const withdrawReturn = operation({
	id: 'withdrawReturn',
	method: 'POST',
	path: '/returning/{course}/withdrawals',
	summary: 'Take a return back while that is still possible; all or none',
	access: 'signed-in',
	repeatable: true,
	params: z.object({ course: slug }),
	body: chosen,
	response: z.object({ withdrawn: z.array(uuid) })
});

const spreadQuery = z.object({ assignment: uuid.optional() });

export const readSpread = operation({
	id: 'readSpread',
	method: 'GET',
	path: '/courses/{course}/spread',
	summary: 'Distribution of totals and criteria by lab section and by grader',
	access: 'signed-in',
	params: z.object({ course: slug }),
	query: spreadQuery,
	response: spread
});

export const spreadTable = operation({
	id: 'spreadTable',
	method: 'GET',
	path: '/courses/{course}/spread.csv',
	summary: 'One line for each finished marking, as UTF-8 CSV',
	access: 'signed-in',
	params: z.object({ course: slug }),
	query: spreadQuery,
	media: 'text/csv'
});
