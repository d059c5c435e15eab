import { sql, type SQL } from 'drizzle-orm';
import type { Database, Transaction } from '../db';
import { allowed } from '../auth';

/** One entry of a document's log. `seq` counts from 1 within the document and follows the order of commits. */
export interface LoggedUpdate {
	seq: number;
	bytes: Uint8Array;
}

export interface DocumentAccess {
	documentId: string;
	epoch: number;
	seq: number;
	/** edits are taken from this person now: permitted, neither frozen nor sealed */
	write: boolean;
	/** why nobody may write any more */
	closed: 'frozen' | 'sealed' | null;
}

const open = sql`(documents.frozen_at is null or documents.frozen_at > now())
	and not exists (select 1 from seals where seals.document_id = documents.id)`;

/**
 * Appends one edit in one statement: the sequence advances and the edit stands in the log, or neither. The row lock of the
 * update makes the sequence follow the commits, so readers may ask for "after n" without missing a late one.
 * Null: not taken (another epoch, frozen, sealed, or this person may not write).
 */
export async function appendUpdate(
	db: Database | Transaction,
	update: { documentId: string; epoch: number; userId: string; bytes: Uint8Array }
): Promise<{ seq: number } | null> {
	const { documentId, epoch, userId, bytes } = update;
	const [row] = await db.execute<{ seq: string }>(sql`
		with advanced as (
			update documents set seq = documents.seq + 1
			where documents.id = ${documentId} and documents.epoch = ${epoch} and ${open}
				and ${allowed('document.write', userId, documentId)}
			returning documents.id, documents.seq
		)
		insert into document_updates (document_id, seq, user_id, bytes)
		select advanced.id, advanced.seq, ${userId}::uuid, ${bytes}::bytea from advanced
		returning seq`);
	return row ? { seq: Number(row.seq) } : null;
}

/** A document's content as base and log, read by one statement, hence of one moment. Apply in order. */
export async function loadDocument(db: Database | Transaction, documentId: string): Promise<LoggedUpdate[]> {
	return entries(
		db,
		sql`select b.upto_seq as seq, b.state as bytes, 0 as late from document_bases b where b.document_id = ${documentId}
			union all
			select u.seq, u.bytes, 1 from document_updates u where u.document_id = ${documentId}
			order by late, seq`
	);
}

/**
 * What the log holds after `seq`. When compaction has meanwhile taken some of it into the base, the base comes first:
 * edits may be applied twice, never missed.
 */
export async function updatesAfter(
	db: Database | Transaction,
	documentId: string,
	seq: number
): Promise<LoggedUpdate[]> {
	return entries(
		db,
		sql`select b.upto_seq as seq, b.state as bytes, 0 as late from document_bases b
				where b.document_id = ${documentId} and b.upto_seq > ${seq}
			union all
			select u.seq, u.bytes, 1 from document_updates u where u.document_id = ${documentId} and u.seq > ${seq}
			order by late, seq`
	);
}

async function entries(db: Database | Transaction, query: SQL): Promise<LoggedUpdate[]> {
	const rows = await db.execute<{ seq: string; bytes: Uint8Array }>(query);
	return rows.map((row) => ({ seq: Number(row.seq), bytes: row.bytes }));
}

/** What a person may do with a document just now; null when it is not there or not theirs to see. */
export async function documentAccess(
	db: Database | Transaction,
	viewerId: string,
	documentId: string
): Promise<DocumentAccess | null> {
	const [row] = await db.execute<{
		epoch: number;
		seq: string;
		permitted: boolean;
		frozen: boolean;
		sealed: boolean;
	}>(sql`
		select documents.epoch, documents.seq, ${allowed('document.write', viewerId, documentId)} as permitted,
			documents.frozen_at is not null and documents.frozen_at <= now() as frozen,
			exists (select 1 from seals where seals.document_id = documents.id) as sealed
		from documents where documents.id = ${documentId} and ${allowed('document.see', viewerId, documentId)}`);
	if (!row) return null;
	const closed = row.frozen ? 'frozen' : row.sealed ? 'sealed' : null;
	return {
		documentId,
		epoch: row.epoch,
		seq: Number(row.seq),
		write: row.permitted && closed === null,
		closed
	};
}

/** Sequence and epoch of many documents at once, for the sweep that hears what a lost doorbell did not ring. */
export async function documentPositions(
	db: Database | Transaction,
	documentIds: string[]
): Promise<Map<string, { seq: number; epoch: number }>> {
	if (documentIds.length === 0) return new Map();
	const rows = await db.execute<{ id: string; seq: string; epoch: number }>(sql`
		select id, seq, epoch from documents where id in (${sql.join(
			documentIds.map((id) => sql`${id}::uuid`),
			sql`, `
		)})`);
	return new Map(rows.map((row) => [row.id, { seq: Number(row.seq), epoch: row.epoch }]));
}

/**
 * Ends an epoch after an edit was refused. Returns the epoch that is current afterwards: the next one, or whichever
 * another process had reached before.
 */
export async function raiseEpoch(
	db: Database | Transaction,
	documentId: string,
	epoch: number
): Promise<number> {
	// One update that always takes the row's lock: whoever waited sees what the first one made of it.
	const [row] = await db.execute<{ epoch: number }>(sql`
		update documents set epoch = case when epoch = ${epoch} then epoch + 1 else epoch end
		where id = ${documentId} returning epoch`);
	return row?.epoch ?? epoch + 1;
}
