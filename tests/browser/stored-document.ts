import postgres from 'postgres';
import * as Y from 'yjs';
import * as collab from '../../src/lib/collab';

/** A document as the database holds it: base, then log, read past the application. */
export async function encodeDocument(url: string, documentId: string): Promise<Y.Doc> {
	const sql = postgres(url, { max: 1, onnotice: () => undefined });
	try {
		const doc = new Y.Doc();
		const bases = await sql<
			{ state: Uint8Array }[]
		>`select state from document_bases where document_id = ${documentId}`;
		const log = await sql<
			{ bytes: Uint8Array }[]
		>`select bytes from document_updates where document_id = ${documentId} order by seq`;
		for (const { state } of bases) Y.applyUpdate(doc, state);
		for (const { bytes } of log) Y.applyUpdate(doc, bytes);
		return doc;
	} finally {
		await sql.end();
	}
}

export const readText = (doc: Y.Doc) => collab.readText(doc);
export const readReadings = (doc: Y.Doc) => collab.readReadings(doc, ['readings']).tables['readings'] ?? [];
