import { inArray } from 'drizzle-orm';
import { readReadings, readText } from '$lib/collab';
import type { Readings, Worksheet } from '$lib/worksheets';
import { schema, type Transaction } from '../db';
import * as experiments from '../experiments';
import * as readings from '../readings';
import type { ReportRow } from './report-row';

export interface CurrentContent {
	worksheet: Worksheet;
	readings: Readings;
	readingsDocument: { id: string; seq: number };
	sections: CurrentSection[];
}
export interface CurrentSection {
	/** from 1 */
	position: number;
	key: string;
	title: string;
	owner: 'author' | 'team';
	document: string;
	seq: number;
	text: string;
}

/**
 * Step: what the report consists of at this moment, from the log. The documents' rows are held, so that nobody's edit
 * falls between two of them: either all of it is in, or none.
 */
export async function currentContent(
	tx: Transaction,
	report: Pick<ReportRow, 'workId' | 'authorId' | 'assignmentId'>
): Promise<CurrentContent> {
	const worksheet = await experiments.worksheetOf(tx, report.assignmentId);
	const documents = await readings.ensureDocuments(tx, report.workId, worksheet.outline, report.authorId);
	const { id } = schema.documents;
	await tx
		.select({ id })
		.from(schema.documents)
		.where(
			inArray(
				id,
				documents.map((document) => document.id)
			)
		)
		.orderBy(id)
		.for('share');
	const sections: CurrentSection[] = [];
	let values: Pick<CurrentContent, 'readings' | 'readingsDocument'> | undefined;
	for (const document of documents) {
		const { doc, seq } = await readings.storedDocument(tx, document.id);
		if (document.kind === 'readings') {
			const tables = worksheet.tables.map((table) => table.name);
			values = { readings: readReadings(doc, tables), readingsDocument: { id: document.id, seq } };
		} else {
			const index = worksheet.outline.findIndex((section) => section.key === document.key);
			const section = worksheet.outline[index];
			if (!section) throw new Error(`no section ${document.key} in ${worksheet.slug}`);
			const { key, title, owner } = section;
			sections.push({
				position: index + 1,
				key,
				title,
				owner,
				document: document.id,
				seq,
				text: readText(doc)
			});
		}
		doc.destroy();
	}
	if (!values) throw new Error(`work ${report.workId} has no readings document`);
	return { worksheet, ...values, sections };
}
