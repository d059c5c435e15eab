import { createHash } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { database, schema, transact } from '../db';
import { logger } from '../logger';
import { blobKey, copy, incomingKey, put, remove } from './object-store';

const { blobs, files, uploads } = schema;

export interface KeptFile {
	id: string;
	name: string;
	size: number;
	sha256: string;
	createdAt: Date;
}

export interface FileToKeep {
	subject: { kind: 'work'; id: string };
	name: string;
	bytes: Uint8Array;
	/** as sniffed, never as claimed */
	mediaType: string;
}

const uploadMinutes = 60;

/** The last part of a name, without control signs, at a length that every file system takes. */
export function plainName(name: string): string {
	const last = name.split(/[/\\]/).at(-1) ?? '';
	const plain = last
		.replace(/[\p{Cc}\p{Cf}]/gu, '')
		.trim()
		.slice(-150)
		// Cut in the middle of a pair, its second half is no character.
		.replace(/^[\uDC00-\uDFFF]/, '')
		.toWellFormed();
	return plain === '' || /^\.+$/.test(plain) ? 'readings.csv' : plain;
}

/**
 * Keeps a file of a work: first among the incoming, then under its hash, then recorded. What is interrupted in between is
 * swept later and never half there. The same bytes under the same name are the same file.
 * Errors: Refusal 'unavailable' when the store does not answer, and the permission's own.
 */
export async function keepFile(act: Act, input: FileToKeep): Promise<KeptFile> {
	const { subject, bytes, mediaType } = input;
	const name = plainName(input.name);
	const sha256 = createHash('sha256').update(bytes).digest();
	const uploadId = uuidv7();
	await database()
		.insert(uploads)
		.values({
			id: uploadId,
			byId: act.viewer.id,
			subjectKind: subject.kind,
			subjectId: subject.id,
			expiresAt: new Date(Date.now() + uploadMinutes * 60_000)
		});
	await put(incomingKey(uploadId), bytes, mediaType);
	await copy(incomingKey(uploadId), blobKey(sha256));
	const kept = await transact(act.repeatable, async (tx) => {
		await tx
			.insert(blobs)
			.values({ sha256, size: bytes.byteLength, mediaType })
			.onConflictDoUpdate({ target: blobs.sha256, set: { unreferencedSince: null } });
		await authorise(tx, act.viewer, 'work.write', subject.id);
		const [same] = await tx
			.select()
			.from(files)
			.where(
				and(
					eq(files.subjectKind, subject.kind),
					eq(files.subjectId, subject.id),
					eq(files.sha256, sha256),
					eq(files.name, name)
				)
			);
		await tx.delete(uploads).where(eq(uploads.id, uploadId));
		if (same) return same;
		const id = uuidv7();
		const [made] = await tx
			.insert(files)
			.values({ id, sha256, subjectKind: subject.kind, subjectId: subject.id, name, byId: act.viewer.id })
			.returning();
		await audit.record(tx, {
			actorId: act.viewer.id,
			action: 'file.keep',
			subjectKind: subject.kind,
			subjectId: subject.id,
			detail: { file: id, name, size: bytes.byteLength }
		});
		return made;
	});
	remove(incomingKey(uploadId)).catch((err: unknown) =>
		logger.info({ err, uploadId }, 'files: an incoming copy stays until the sweep')
	);
	if (!kept) throw new Error('a file that was just recorded is not there');
	return {
		id: kept.id,
		name: kept.name,
		size: bytes.byteLength,
		sha256: sha256.toString('hex'),
		createdAt: new Date(kept.createdAt)
	};
}
