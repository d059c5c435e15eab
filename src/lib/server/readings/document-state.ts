import { sql } from 'drizzle-orm';
import * as Y from 'yjs';
import type { Database, Transaction } from '../db';
import { loadDocument } from './document-log';

/** A document built from base and log alone: what is stored, and nothing that only lives in some process's memory. */
export async function storedDocument(
	db: Database | Transaction,
	documentId: string
): Promise<{ doc: Y.Doc; seq: number; entries: number }> {
	const log = await loadDocument(db, documentId);
	const doc = new Y.Doc();
	doc.transact(() => {
		for (const entry of log) Y.applyUpdate(doc, entry.bytes);
	});
	return { doc, seq: log.reduce((highest, entry) => Math.max(highest, entry.seq), 0), entries: log.length };
}

/** The whole stored state as one update, and the sequence it reaches. */
export async function documentState(
	tx: Database | Transaction,
	documentId: string
): Promise<{ state: Uint8Array; seq: number }> {
	const { doc, seq } = await storedDocument(tx, documentId);
	const state = Y.encodeStateAsUpdate(doc);
	doc.destroy();
	return { state, seq };
}

/**
 * Puts the log up to its present end into the base. Built from log rows only, for a process's memory may hold what was
 * never stored; base and deletion are one transaction. Returns the number of log rows taken in.
 */
export async function compactDocument(db: Database, documentId: string): Promise<number> {
	return db.transaction(async (tx) => {
		// One compaction of a document at a time; appends go on meanwhile.
		await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${documentId}, 4310))`);
		const { doc, seq, entries } = await storedDocument(tx, documentId);
		const state = Y.encodeStateAsUpdate(doc);
		doc.destroy();
		if (entries < 2) return 0;
		await tx.execute(sql`
			insert into document_bases (document_id, upto_seq, state) values (${documentId}, ${seq}, ${state}::bytea)
			on conflict (document_id) do update set upto_seq = excluded.upto_seq, state = excluded.state`);
		const removed = await tx.execute(
			sql`delete from document_updates where document_id = ${documentId} and seq <= ${seq} returning seq`
		);
		return removed.length;
	});
}
