import { z } from 'zod';
import { operation } from './operation';
import { instant, uuid } from './shapes';

/** Derived from attempts, markings and releases. An author sees 'handed in' until the report comes back. */
export const reportState = z.enum(['draft', 'handed in', 'in marking', 'marked', 'returned', 'under appeal']);
export type ReportState = z.infer<typeof reportState>;

const sha256 = z.string().regex(/^[0-9a-f]{64}$/);

/** What the course's rule says of a time of hand-in. */
export const lateness = z.object({
	late: z.boolean(),
	minutesLate: z.number().int(),
	/** share of the points, 0 to 1 */
	deduction: z.number(),
	/** 'Late by 2 h: 5 % off by this course's rule.' */
	sentence: z.string()
});

export const attempt = z.object({
	/** of the snapshot */
	id: uuid,
	attempt: z.number().int(),
	/** of the manifest, as in the receipt */
	sha256,
	receivedAt: instant,
	dueAt: instant,
	lateness,
	/** this one is marked */
	counts: z.boolean()
});
export type Attempt = z.infer<typeof attempt>;

export const due = z.object({
	dueAt: instant,
	closesAt: instant,
	/** wall clock of the course, 'YYYY-MM-DD HH:MM:SS' */
	dueLocal: z.string(),
	closesLocal: z.string(),
	zone: z.string(),
	extended: z.boolean(),
	rule: z.object({
		graceMinutes: z.number(),
		steps: z.array(z.object({ upToHours: z.number(), percent: z.number() })),
		refuseAfterHours: z.number().nullable().optional()
	})
});

export const sectionDocument = z.object({
	/** from 1: the number of the section */
	position: z.number().int(),
	key: z.string(),
	title: z.string(),
	owner: z.enum(['author', 'team']),
	/** live document, and its epoch */
	document: uuid,
	epoch: z.number().int(),
	/** Markdown as stored at that moment */
	text: z.string(),
	/** edits are taken from this person now */
	write: z.boolean(),
	/** why nobody may write any more */
	closed: z.enum(['frozen', 'sealed']).nullable()
});
export type SectionDocument = z.infer<typeof sectionDocument>;

export const report = z.object({
	id: uuid,
	alias: z.string(),
	work: uuid,
	/** hand-in by this person */
	own: z.boolean(),
	state: reportState,
	due,
	/** newest first */
	attempts: z.array(attempt),
	readings: z.object({ document: uuid, epoch: z.number().int() }),
	sections: z.array(sectionDocument)
});
export type Report = z.infer<typeof report>;

/** A value as the page showed it, unrounded; null stands for what JSON has no number for. */
export const shownResult = z.object({
	value: z.number().nullable(),
	unit: z.string().max(200),
	standardUncertainty: z.number().nullable(),
	text: z.string().max(500)
});

export const handedIn = z.object({
	report: uuid,
	attempt,
	/** address the receipt goes to */
	receiptTo: z.string()
});
export type HandedIn = z.infer<typeof handedIn>;

export const snapshot = z.object({
	id: uuid,
	alias: z.string(),
	attempt: z.number().int(),
	sha256,
	engine: z.string(),
	/** null to those from whom the author is hidden: the time could tell who it is */
	receivedAt: instant.nullable(),
	dueAt: instant.nullable(),
	sections: z.array(
		z.object({
			position: z.number().int(),
			key: z.string(),
			title: z.string(),
			owner: z.enum(['author', 'team']),
			text: z.string()
		})
	),
	/** as lib/worksheets describes them */
	readings: z.looseObject({}),
	evaluation: z.looseObject({})
});

export const openReport = operation({
	id: 'reports.open',
	method: 'PUT',
	path: '/works/{work}/report',
	summary: 'Opens the own report on a work; made at the first call.',
	access: 'signed-in',
	params: z.object({ work: uuid }),
	response: report
});

export const readReport = operation({
	id: 'reports.read',
	method: 'GET',
	path: '/reports/{report}',
	summary: 'A report: its sections as stored, when it is due, what was handed in.',
	access: 'signed-in',
	params: z.object({ report: uuid }),
	response: report
});

export const handIn = operation({
	id: 'reports.handIn',
	method: 'POST',
	path: '/reports/{report}/hand-in',
	summary:
		'Hands the report in as it is stored. `results` are the values that the page showed; 409 with both sides when the server computes others.',
	access: 'signed-in',
	params: z.object({ report: uuid }),
	body: z.object({
		/** version of the arithmetic that made them */
		engine: z.string().max(40),
		results: z.record(z.string().max(200), shownResult)
	}),
	response: handedIn,
	status: 201,
	repeatable: true
});

export const readSnapshot = operation({
	id: 'reports.readSnapshot',
	method: 'GET',
	path: '/snapshots/{snapshot}',
	summary: 'What was handed in: text, readings and results, with the hash over all of it.',
	access: 'signed-in',
	params: z.object({ snapshot: uuid }),
	response: snapshot
});
