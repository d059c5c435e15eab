import type { Evaluation } from '$lib/worksheets';
import { schema, type Transaction } from '../db';
import * as experiments from '../experiments';
import { canonicalPart, hex } from './canonical';
import type { CurrentContent } from './current-content';
import type { Manifest } from './manifest';

export interface StoredSnapshot {
	id: string;
	attempt: number;
	manifest: Uint8Array;
	receivedAt: Date;
	dueAt: Date;
}

/** Step: writes the parts, the manifest over them, and the snapshot that names it. */
export async function storeSnapshot(
	tx: Transaction,
	input: {
		id: string;
		report: { id: string };
		attempt: number;
		byId: string;
		receivedAt: Date;
		dueAt: Date;
		content: CurrentContent;
		evaluation: Evaluation;
	}
): Promise<StoredSnapshot> {
	const { id, report, attempt, byId, receivedAt, dueAt, content, evaluation } = input;
	const { engine } = evaluation;
	const store = (value: unknown) => experiments.storePart(tx, canonicalPart(value));
	const sections: (Manifest['sections'][number] & { bytes: Uint8Array })[] = [];
	for (const { text, ...section } of content.sections) {
		const bytes = await store(text);
		sections.push({ ...section, bytes, part: hex(bytes) });
	}
	const manifest: Manifest = {
		format: 1,
		report: report.id,
		attempt,
		engine,
		receivedAt: receivedAt.toISOString(),
		dueAt: dueAt.toISOString(),
		worksheet: hex(await store(content.worksheet)),
		readings: hex(await store(content.readings)),
		evaluation: hex(await store(evaluation)),
		readingsDocument: content.readingsDocument,
		sections: sections.map(({ bytes: _bytes, ...section }) => section)
	};
	const manifestPart = await store(manifest);
	await tx
		.insert(schema.snapshots)
		.values({ id, reportId: report.id, attempt, manifest: manifestPart, engine, receivedAt, dueAt, byId });
	await tx.insert(schema.snapshotSections).values(
		sections.map(({ position, key, title, document, seq, bytes }) => ({
			snapshotId: id,
			position,
			key,
			title,
			documentId: document,
			seq,
			part: bytes
		}))
	);
	return { id, attempt, manifest: manifestPart, receivedAt, dueAt };
}
