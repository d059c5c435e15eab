import type { Database } from '../db';
import { logger } from '../logger';
import { causeOf } from './cause-of';
import * as readings from '../readings';

/** Log rows after which a document is put together into a base. */
const longLog = 200;

/** After the last person left: keeps the text as a version of that day, and shortens a long log. */
export async function keepVersion(db: Database, documentId: string): Promise<void> {
	try {
		await readings.keepText(db, documentId);
		const entries = await readings.loadDocument(db, documentId);
		if (entries.length > longLog) await readings.compactDocument(db, documentId);
	} catch (err) {
		logger.warn(
			{ err: causeOf(err), document: documentId },
			'live: a version was not kept; the log has everything'
		);
	}
}
