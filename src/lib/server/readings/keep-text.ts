import { sql } from 'drizzle-orm';
import { readText } from '$lib/collab';
import type { Database } from '../db';
import { storedDocument } from './document-state';
import { storeVersion } from './store-version';

/** Keeps the stored text of a written document as a version, when it changed since the last one. Readings have no versions: their log and seal tell their story. */
export async function keepText(db: Database, documentId: string): Promise<boolean> {
	const [row] = await db.execute<{ kind: string; by: string | null }>(sql`
		select d.kind, (
			select u.user_id from document_updates u where u.document_id = d.id order by u.seq desc limit 1
		) as by from documents d where d.id = ${documentId}`);
	if (!row || row.kind === 'readings' || row.kind === 'workings') return false;
	const { doc, seq } = await storedDocument(db, documentId);
	const text = readText(doc);
	doc.destroy();
	if (seq === 0) return false;
	return storeVersion(db, { documentId, seq, text, byId: row.by });
}
