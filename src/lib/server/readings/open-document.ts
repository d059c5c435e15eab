import { and, desc, eq, lt } from 'drizzle-orm';
import type { Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound, unprocessable } from '../errors';
import { documentAccess } from './document-log';

const { documents, documentVersions, users } = schema;

export interface DocumentHead {
	id: string;
	work: string;
	kind: string;
	key: string;
	own: boolean;
	epoch: number;
	seq: number;
	canWrite: boolean;
	closed: 'frozen' | 'sealed' | null;
}

/** What a live document is and what the viewer may do with it. Errors: Refusal 'not-found'. */
export async function openDocument(viewer: Viewer, documentId: string): Promise<DocumentHead> {
	const db = database();
	const access = await documentAccess(db, viewer.id, documentId);
	const [row] = await db.select().from(documents).where(eq(documents.id, documentId));
	if (!access || !row) throw notFound();
	return {
		id: row.id,
		work: row.workId,
		kind: row.kind,
		key: row.key,
		own: row.authorId === viewer.id,
		epoch: access.epoch,
		seq: access.seq,
		canWrite: access.write,
		closed: access.closed
	};
}

export interface ListedVersion {
	seq: number;
	text: string;
	by: string | null;
	at: Date;
}

function readCursor(after: string): number {
	if (/^\d{1,15}$/.test(after)) return Number(after);
	throw unprocessable('This cursor is not one of ours. Start from the first page.', {
		after: 'not a cursor'
	});
}

/** Kept versions, newest first, a page at a time. Errors: Refusal 'not-found'. */
export async function versionsOf(
	viewer: Viewer,
	documentId: string,
	page: { after?: string | undefined; limit: number }
): Promise<{ items: ListedVersion[]; next: string | null }> {
	const db = database();
	if (!(await documentAccess(db, viewer.id, documentId))) throw notFound();
	const before = page.after === undefined ? undefined : readCursor(page.after);
	const rows = await db
		.select({
			seq: documentVersions.seq,
			text: documentVersions.text,
			by: users.initials,
			at: documentVersions.at
		})
		.from(documentVersions)
		.leftJoin(users, eq(users.id, documentVersions.byId))
		.where(
			and(
				eq(documentVersions.documentId, documentId),
				before === undefined ? undefined : lt(documentVersions.seq, before)
			)
		)
		.orderBy(desc(documentVersions.seq))
		.limit(page.limit + 1);
	const items = rows.slice(0, page.limit);
	return { items, next: rows.length > page.limit ? String(items.at(-1)?.seq) : null };
}
