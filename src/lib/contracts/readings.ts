import { z } from 'zod';
import { operation } from './operation';
import { instant, page, pageQuery, uuid } from './shapes';

const workParams = z.object({ work: uuid });
const name = z.string().regex(/^[A-Za-z][A-Za-z0-9_]{0,62}$/);
/** Bytes of a file of readings. */
const largestFile = 10 * 1024 * 1024;

const readingsProblem = z.object({
	severity: z.enum(['error', 'warning', 'note']),
	code: z.string(),
	message: z.string(),
	table: z.string().optional(),
	row: z.string().optional(),
	column: z.string().optional(),
	parameter: z.string().optional(),
	name: z.string().optional()
});

const typedRow = z.object({
	id: z.string(),
	cells: z.record(z.string(), z.string()),
	status: z.enum(['used', 'aborted', 'excluded']),
	reason: z.string().optional()
});
/** Readings exactly as typed. */
export const typedReadings = z.object({
	parameters: z.record(z.string(), z.string()),
	tables: z.record(z.string(), z.array(typedRow))
});

export const readReadings = operation({
	id: 'readReadings',
	method: 'GET',
	path: '/works/{work}/readings',
	summary: 'Readings of a work as stored, texts as typed, with the place in the log they belong to',
	access: 'signed-in',
	params: workParams,
	response: z.object({
		documentId: uuid,
		epoch: z.number().int(),
		seq: z.number().int(),
		readings: typedReadings
	})
});

export const readEvaluation = operation({
	id: 'readEvaluation',
	method: 'GET',
	path: '/works/{work}/evaluation',
	summary: 'What the stored readings give: values with uncertainty, fits, figures, comparisons, problems',
	access: 'signed-in',
	params: workParams,
	response: z.object({
		engine: z.string(),
		problems: z.array(readingsProblem),
		quantities: z.record(z.string(), z.unknown()),
		tables: z.record(z.string(), z.unknown()),
		fits: z.record(z.string(), z.unknown()),
		comparisons: z.record(z.string(), z.unknown()),
		figures: z.record(z.string(), z.unknown()),
		workings: z.record(z.string(), z.unknown())
	})
});

export const takeReadingsFile = operation({
	id: 'takeReadingsFile',
	method: 'PUT',
	path: '/works/{work}/readings/{table}/file',
	summary:
		'Uploads a table of readings (comma, semicolon or tab; decimal point or comma; at most 10 MB and 50,000 rows): the file is kept, its rows come back to be looked at. Nothing is inserted',
	access: 'signed-in',
	params: workParams.extend({ table: name }),
	query: z.object({ name: z.string().min(1).max(300) }),
	upload: { maxBytes: largestFile },
	response: z.object({
		file: z.object({ id: uuid, name: z.string(), size: z.number().int() }).nullable(),
		note: z.string(),
		table: z.object({
			rows: z.array(z.object({ cells: z.record(z.string(), z.string()) })),
			problems: z.array(readingsProblem),
			columns: z.array(
				z.object({
					header: z.string(),
					column: z.string().nullable(),
					unit: z.string().nullable(),
					note: z.string().nullable()
				})
			),
			delimiter: z.string(),
			rowCount: z.number().int()
		})
	})
});

export const listWorkFiles = operation({
	id: 'listWorkFiles',
	method: 'GET',
	path: '/works/{work}/files',
	summary: 'Files kept with a work, newest first',
	access: 'signed-in',
	params: workParams,
	response: z.object({
		items: z.array(
			z.object({ id: uuid, name: z.string(), size: z.number().int(), by: z.string(), createdAt: instant })
		)
	})
});

export const readFile = operation({
	id: 'readFile',
	method: 'GET',
	path: '/files/{file}',
	summary: "A file's bytes, always as an attachment",
	access: 'signed-in',
	params: z.object({ file: uuid }),
	media: 'application/octet-stream'
});

export const readDocument = operation({
	id: 'readDocument',
	method: 'GET',
	path: '/documents/{document}',
	summary: 'A live document: its epoch on the socket, its place in the log, and whether it takes edits',
	access: 'signed-in',
	params: z.object({ document: uuid }),
	response: z.object({
		id: uuid,
		work: uuid,
		kind: z.string(),
		key: z.string(),
		own: z.boolean(),
		epoch: z.number().int(),
		seq: z.number().int(),
		canWrite: z.boolean(),
		closed: z.enum(['frozen', 'sealed']).nullable()
	})
});

export const listVersions = operation({
	id: 'listVersions',
	method: 'GET',
	path: '/documents/{document}/versions',
	summary: 'Kept texts of a document, newest first',
	access: 'signed-in',
	params: z.object({ document: uuid }),
	query: pageQuery,
	response: page(
		z.object({ seq: z.number().int(), text: z.string(), by: z.string().nullable(), at: instant })
	)
});
