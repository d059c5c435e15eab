import { z } from 'zod';
import { slug } from './courses';
import { operation } from './operation';
import { instant, uuid } from './shapes';

const alias = z.string().regex(/^[a-z]+-[0-9a-z]{6,}$/);

const remarkKind = z.enum(['to correct', 'question', 'note', 'well done']);
const body = z.string().trim().min(1, 'Write the remark first.').max(4000, 'At most 4000 characters.');

/** W3C Web Annotation selectors: a text quote with its position, or a fragment for a table, figure or step. */
const selector = z.discriminatedUnion('type', [
	z.object({
		type: z.literal('TextQuoteSelector'),
		exact: z.string().max(4000),
		prefix: z.string().max(200),
		suffix: z.string().max(200)
	}),
	z.object({
		type: z.literal('TextPositionSelector'),
		start: z.number().int().min(0),
		end: z.number().int().min(0)
	}),
	z.object({
		type: z.literal('FragmentSelector'),
		value: z.string().min(1).max(200)
	})
]);

const anchor = z.object({
	/** of the snapshot's section, from 0 */
	section: z.number().int().min(0).max(200),
	selectors: z.array(selector).min(1).max(3),
	/** names behind the links inside the quoted words, in order */
	links: z.array(z.string().max(200)).max(500),
	/** version of the plain-text projection the positions count in */
	projection: z.number().int().min(1).max(1000)
});

const remark = z.object({
	id: uuid,
	kind: remarkKind,
	body: z.string(),
	at: instant,
	anchor: anchor.extend({ attached: z.boolean() }).nullable()
});

/** Points in hundredths, so that sums are exact. */
const total = z.object({
	points: z.number().int(),
	maximum: z.number().int(),
	/** criteria with a level, of all */
	set: z.number().int(),
	of: z.number().int()
});

/** A marking as its marker works on it. Every write answers with all of it, so that nothing changed elsewhere stays unseen. */
const markingState = z.object({
	id: uuid,
	alias,
	label: z.string(),
	revision: z.number().int(),
	/** which hand-in it is a marking of: the sheet shown names the same one, or has to be opened anew */
	edition: z.string(),
	finishedAt: instant.nullable(),
	returned: z.boolean(),
	levels: z.array(
		z.object({ criterion: uuid, level: z.number().int(), points: z.number().int(), at: instant })
	),
	remarks: z.array(remark),
	total
});

const sittingReport = z.object({
	position: z.number().int(),
	alias,
	label: z.string(),
	/** absent while names are hidden */
	author: z.string().nullable(),
	/** in words, "on time" or "late by 2 h"; absent while names are hidden */
	received: z.string().nullable(),
	state: z.enum(['unmarked', 'begun', 'finished', 'returned', 'taken']),
	/** first name of the grader who has it, when taken */
	marker: z.string().nullable(),
	total: total.nullable()
});

const sitting = z.object({
	id: uuid,
	assignment: z.object({ id: uuid, title: z.string() }),
	namesHidden: z.boolean(),
	reports: z.array(sittingReport),
	finished: z.number().int(),
	/** the next report that nobody has marked and nobody else has begun */
	next: z.object({ alias, label: z.string() }).nullable()
});

const keptRemark = z.object({
	id: uuid,
	kind: remarkKind,
	body: z.string(),
	uses: z.number().int()
});

const reply = z.object({ id: uuid, body: z.string(), at: instant, own: z.boolean() });

export type SittingShape = z.output<typeof sitting>;
export type SittingReportShape = z.output<typeof sittingReport>;
export type MarkingState = z.output<typeof markingState>;
export type RemarkShape = z.output<typeof remark>;
export type RemarkKind = z.output<typeof remarkKind>;
export type RemarkAnchor = z.output<typeof anchor>;
export type KeptRemarkShape = z.output<typeof keptRemark>;
export type ReplyShape = z.output<typeof reply>;
export type TotalShape = z.output<typeof total>;

export const openSitting = operation({
	id: 'openSitting',
	method: 'POST',
	path: '/sittings',
	summary:
		"Open the grader's sitting for an assignment; the order is drawn once, later reports are added at its end",
	access: 'signed-in',
	body: z.object({ assignment: uuid }),
	response: sitting
});

export const readSitting = operation({
	id: 'readSitting',
	method: 'GET',
	path: '/sittings/{sitting}',
	summary: 'A sitting: reports in their drawn order, and the next one to mark',
	access: 'signed-in',
	params: z.object({ sitting: uuid }),
	response: sitting
});

export const openMarking = operation({
	id: 'openMarking',
	method: 'POST',
	path: '/markings',
	summary:
		"Begin or resume the first marking of a report's counted snapshot; 409 while another grader has it",
	access: 'signed-in',
	body: z.object({ alias }),
	response: markingState
});

export const readMarking = operation({
	id: 'readMarking',
	method: 'GET',
	path: '/markings/{marking}',
	summary: 'A marking: levels, remarks and the total so far',
	access: 'signed-in',
	params: z.object({ marking: uuid }),
	response: markingState
});

export const setLevel = operation({
	id: 'setLevel',
	method: 'PUT',
	path: '/markings/{marking}/levels/{criterion}',
	summary: 'Set the level of a criterion, or take it away with null; earlier levels stay in the history',
	access: 'signed-in',
	conditional: true,
	params: z.object({ marking: uuid, criterion: uuid }),
	body: z.object({
		level: z.number().int().min(0).max(100).nullable(),
		reason: z.string().max(500).default('')
	}),
	response: markingState
});

export const addRemark = operation({
	id: 'addRemark',
	method: 'PUT',
	path: '/markings/{marking}/remarks/{remark}',
	summary: 'Add a remark under an id made by the client (UUIDv7), so that repeating it is harmless',
	access: 'signed-in',
	conditional: true,
	params: z.object({ marking: uuid, remark: uuid }),
	body: z.object({ kind: remarkKind, body, anchor }),
	response: markingState
});

export const reviseRemark = operation({
	id: 'reviseRemark',
	method: 'PATCH',
	path: '/remarks/{remark}',
	summary: 'Change the words or the kind of a remark; brings a deleted one back',
	access: 'signed-in',
	conditional: true,
	params: z.object({ remark: uuid }),
	body: z.object({ kind: remarkKind, body }),
	response: markingState
});

export const deleteRemark = operation({
	id: 'deleteRemark',
	method: 'DELETE',
	path: '/remarks/{remark}',
	summary: 'Take a remark away; its history stays',
	access: 'signed-in',
	conditional: true,
	params: z.object({ remark: uuid }),
	response: markingState
});

export const finishMarking = operation({
	id: 'finishMarking',
	method: 'POST',
	path: '/markings/{marking}/finish',
	summary: 'Finish a marking that has a level for every criterion',
	access: 'signed-in',
	conditional: true,
	params: z.object({ marking: uuid }),
	response: z.object({ marking: markingState, next: z.object({ alias, label: z.string() }).nullable() })
});

export const reopenMarking = operation({
	id: 'reopenMarking',
	method: 'POST',
	path: '/markings/{marking}/reopen',
	summary: 'Take up a finished marking again, until it is returned',
	access: 'signed-in',
	conditional: true,
	params: z.object({ marking: uuid }),
	response: markingState
});

export const listKeptRemarks = operation({
	id: 'listKeptRemarks',
	method: 'GET',
	path: '/courses/{course}/kept-remarks',
	summary: "The grader's own kept remarks, most used first",
	access: 'signed-in',
	params: z.object({ course: slug }),
	response: z.object({ items: z.array(keptRemark) })
});

export const keepRemark = operation({
	id: 'keepRemark',
	method: 'POST',
	path: '/courses/{course}/kept-remarks',
	summary: 'Keep a remark for other reports; the same words are kept once',
	access: 'signed-in',
	params: z.object({ course: slug }),
	body: z.object({ kind: remarkKind, body }),
	response: keptRemark
});

export const useKeptRemark = operation({
	id: 'useKeptRemark',
	method: 'POST',
	path: '/kept-remarks/{kept}/uses',
	summary: 'Count a use of a kept remark',
	access: 'signed-in',
	params: z.object({ kept: uuid }),
	response: keptRemark
});

export const dropKeptRemark = operation({
	id: 'dropKeptRemark',
	method: 'DELETE',
	path: '/kept-remarks/{kept}',
	summary: 'No longer keep a remark; where it was used it stays',
	access: 'signed-in',
	params: z.object({ kept: uuid })
});

export const replyToRemark = operation({
	id: 'replyToRemark',
	method: 'PUT',
	path: '/remarks/{remark}/replies/{reply}',
	summary: "Answer a remark on one's own returned report, under an id made by the client",
	access: 'signed-in',
	params: z.object({ remark: uuid, reply: uuid }),
	body: z.object({
		body: z.string().trim().min(1, 'Write the reply first.').max(4000, 'At most 4000 characters.')
	}),
	response: reply
});
