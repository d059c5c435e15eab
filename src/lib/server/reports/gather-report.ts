import { sql } from 'drizzle-orm';
import { readReadings, readText } from '$lib/collab';
import type { Report, SectionDocument } from '$lib/contracts/reports';
import type { Readings, Worksheet } from '$lib/worksheets';
import { allowed, type Viewer } from '../auth';
import * as courses from '../courses';
import type { Database } from '../db';
import * as experiments from '../experiments';
import * as readings from '../readings';
import { attemptsOf } from './attempts';
import type { ReportRow } from './report-row';
import { factsOf, stateForAuthor, stateOf } from './state';

/** A report as its sheet shows it: the API's answer, and what the page works up by itself. */
export interface GatheredReport {
	report: Report;
	worksheet: Worksheet;
	readings: Readings;
}

/** Everything about a report that its author's pages show. Says nothing of who may see it. */
export async function gatherReport(db: Database, viewer: Viewer, row: ReportRow): Promise<GatheredReport> {
	const [worksheet, due, facts, documents] = await Promise.all([
		experiments.worksheetOf(db, row.assignmentId),
		courses.dueFor(db, row.assignmentId, row.authorId),
		factsOf(db, [row.id]),
		documentsOf(db, viewer, row)
	]);
	const own = row.authorId === viewer.id;
	const state = facts.get(row.id);
	if (!state) throw new Error(`report ${row.id} was just there`);
	const contents = await Promise.all(
		documents.map(async (document) => ({ document, ...(await readings.storedDocument(db, document.id)) }))
	);
	const table = contents.find(({ document }) => document.kind === 'readings');
	if (!table) throw new Error(`work ${row.workId} has no readings document`);
	const sections = worksheet.outline.flatMap(({ key, title, owner }, index): SectionDocument[] => {
		const found = contents.find(({ document }) => document.kind === 'section' && document.key === key);
		if (!found) return [];
		const { id, epoch, write, closed } = found.document;
		return [
			{
				position: index + 1,
				key,
				title,
				owner,
				document: id,
				epoch,
				text: readText(found.doc),
				write,
				closed
			}
		];
	});
	const values = readReadings(
		table.doc,
		worksheet.tables.map(({ name }) => name)
	);
	for (const { doc } of contents) doc.destroy();
	return {
		report: {
			id: row.id,
			alias: row.alias,
			work: row.workId,
			own,
			state: own ? stateForAuthor(state) : stateOf(state),
			due: {
				dueAt: due.dueAt.toISOString(),
				closesAt: due.closesAt.toISOString(),
				dueLocal: due.dueLocal,
				closesLocal: due.closesLocal,
				zone: due.zone,
				extended: due.extended,
				rule: due.rule
			},
			attempts: await attemptsOf(db, row, due.rule),
			readings: { document: table.document.id, epoch: table.document.epoch },
			sections
		},
		worksheet,
		readings: values
	};
}

interface ReportDocument {
	id: string;
	kind: string;
	key: string;
	epoch: number;
	write: boolean;
	closed: 'frozen' | 'sealed' | null;
}

async function documentsOf(db: Database, viewer: Viewer, row: ReportRow): Promise<ReportDocument[]> {
	const rows = await db.execute<{
		id: string;
		kind: string;
		key: string;
		epoch: number;
		permitted: boolean;
		frozen: boolean;
		sealed: boolean;
	}>(sql`
		select doc.id, doc.kind, doc.key, doc.epoch, ${allowed('document.write', viewer.id, sql`doc.id`)} as permitted,
			doc.frozen_at is not null and doc.frozen_at <= now() as frozen,
			exists (select 1 from seals where seals.document_id = doc.id) as sealed
		from documents doc
		where doc.work_id = ${row.workId} and doc.kind in ('section', 'readings')
			and (doc.author_id is null or doc.author_id = ${row.authorId})`);
	return rows.map(({ id, kind, key, epoch, permitted, frozen, sealed }) => {
		const closed = frozen ? 'frozen' : sealed ? 'sealed' : null;
		return { id, kind, key, epoch, closed, write: permitted && closed === null };
	});
}
