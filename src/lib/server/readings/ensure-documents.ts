import { sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { OutlineSection } from '$lib/worksheets';
import type { Transaction } from '../db';
import { setFreezing } from './set-freezing';

export interface DocumentRow {
	id: string;
	kind: 'readings' | 'section' | 'workings' | 'plan' | 'notebook';
	key: string;
	authorId: string | null;
	epoch: number;
	seq: number;
	/** not there before this call */
	made: boolean;
}

/**
 * Makes the documents of a work that are not there yet: readings and team sections (no author), and, when `authorId` is
 * given, that author's own sections. Repeating it changes nothing. Returns all of them in the outline's order, the readings first.
 */
export async function ensureDocuments(
	tx: Transaction,
	workId: string,
	outline: readonly Pick<OutlineSection, 'key' | 'owner'>[],
	authorId: string | null
): Promise<DocumentRow[]> {
	const wanted: { kind: DocumentRow['kind']; key: string; authorId: string | null }[] = [
		{ kind: 'readings', key: 'readings', authorId: null }
	];
	for (const section of outline) {
		if (section.owner === 'team') wanted.push({ kind: 'section', key: section.key, authorId: null });
		else if (authorId) wanted.push({ kind: 'section', key: section.key, authorId });
	}
	const values = wanted.map(
		({ kind, key, authorId: owner }) =>
			sql`(${uuidv7()}::uuid, ${workId}::uuid, ${owner}::uuid, ${kind}, ${key})`
	);
	const made = await tx.execute<{ id: string }>(sql`
		insert into documents (id, work_id, author_id, kind, key) values ${sql.join(values, sql`, `)}
		on conflict on constraint documents_one do nothing returning id`);
	const ids = new Set(made.map(({ id }) => id));
	await setFreezing(tx, workId);
	const rows = await tx.execute<{
		id: string;
		kind: DocumentRow['kind'];
		key: string;
		author_id: string | null;
		epoch: number;
		seq: string;
	}>(sql`
		select id, kind, key, author_id, epoch, seq from documents
		where work_id = ${workId} and (author_id is null or author_id = ${authorId}::uuid)`);
	return wanted.flatMap(({ kind, key, authorId: owner }) => {
		const row = rows.find((one) => one.kind === kind && one.key === key && one.author_id === owner);
		if (!row) return [];
		const { id, epoch, seq } = row;
		return [{ id, kind, key, authorId: owner, epoch, seq: Number(seq), made: ids.has(id) }];
	});
}

/**
 * First content of a document, by the server alone: two seeds made apart would both stay and double the text. Does nothing
 * and returns false when the document already has content.
 */
export async function seedDocument(
	tx: Transaction,
	documentId: string,
	bytes: Uint8Array,
	userId: string | null = null
): Promise<boolean> {
	const rows = await tx.execute(sql`
		with advanced as (
			update documents set seq = 1 where id = ${documentId} and seq = 0 returning id, seq
		)
		insert into document_updates (document_id, seq, user_id, bytes)
		select id, seq, ${userId}::uuid, ${bytes}::bytea from advanced returning seq`);
	return rows.length > 0;
}
