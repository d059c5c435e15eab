import { desc, eq, and, sql } from 'drizzle-orm';
import type { Readable } from 'node:stream';
import { allowed, authorise, type Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound } from '../errors';
import { blobKey, read } from './object-store';

const { blobs, files, users } = schema;

/** A file's bytes for whoever may see it. Errors: Refusal 'not-found', 'unavailable'. */
export async function open(
	viewer: Viewer,
	fileId: string
): Promise<{ name: string; size: number; mediaType: string; bytes: Readable }> {
	const db = database();
	await authorise(db, viewer, 'file.see', fileId);
	const [row] = await db
		.select({ name: files.name, sha256: files.sha256, size: blobs.size, mediaType: blobs.mediaType })
		.from(files)
		.innerJoin(blobs, eq(blobs.sha256, files.sha256))
		.where(eq(files.id, fileId));
	if (!row) throw notFound();
	return { name: row.name, size: row.size, mediaType: row.mediaType, bytes: await read(blobKey(row.sha256)) };
}

export interface ListedFile {
	id: string;
	name: string;
	size: number;
	by: string;
	createdAt: Date;
}

/** Files of a work that the viewer may see, newest first. */
export async function ofWork(viewer: Viewer, workId: string): Promise<ListedFile[]> {
	return database()
		.select({
			id: files.id,
			name: files.name,
			size: blobs.size,
			by: users.initials,
			createdAt: files.createdAt
		})
		.from(files)
		.innerJoin(blobs, eq(blobs.sha256, files.sha256))
		.innerJoin(users, eq(users.id, files.byId))
		.where(
			and(
				eq(files.subjectKind, 'work'),
				eq(files.subjectId, workId),
				allowed('file.see', viewer.id, sql`${files.id}`)
			)
		)
		.orderBy(desc(files.createdAt))
		.limit(100);
}
