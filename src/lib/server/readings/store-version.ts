import { sql } from 'drizzle-orm';
import { storableText, type Database, type Transaction } from '../db';

/** Keeps the text as it stands at `seq`. Repeating it for the same moment changes nothing; false when the text is the last one kept. */
export async function storeVersion(
	db: Database | Transaction,
	version: { documentId: string; seq: number; text: string; byId: string | null }
): Promise<boolean> {
	const { documentId, seq, byId } = version;
	const text = storableText(version.text);
	const rows = await db.execute(sql`
		insert into document_versions (document_id, seq, text, by_id)
		select ${documentId}::uuid, ${seq}::bigint, ${text}::text, ${byId}::uuid
		where ${text}::text is distinct from (
			select text from document_versions where document_id = ${documentId} order by seq desc limit 1
		)
		on conflict do nothing returning seq`);
	return rows.length > 0;
}
