import { eq, inArray, sql } from 'drizzle-orm';
import {
	evaluationFromStored,
	fromStored,
	type Readings,
	type StoredEvaluation,
	type StoredWorksheet
} from '$lib/worksheets';
import { schema, type Database, type Transaction } from '../db';
import { notFound } from '../errors';
import { hex, sha256 } from './canonical';
import type { Manifest, Snapshot } from './manifest';

const { parts, snapshots } = schema;

/** What was handed in is not what its hash says any more. */
export class DamagedSnapshotError extends Error {
	constructor(
		readonly snapshotId: string,
		readonly part: string,
		reason: string
	) {
		super(`snapshot ${snapshotId}: ${part} ${reason}`);
		this.name = 'DamagedSnapshotError';
	}
}

/**
 * Reads what was handed in, every part checked against its hash. Says nothing of who may see it.
 * Errors: Refusal 'not-found'; DamagedSnapshotError.
 */
export async function readSnapshot(db: Database | Transaction, snapshotId: string): Promise<Snapshot> {
	const [row] = await db.select().from(snapshots).where(eq(snapshots.id, snapshotId));
	if (!row) throw notFound();
	const reader = new PartReader(snapshotId);
	await reader.fetch(db, [hex(row.manifest)]);
	const manifest = reader.json<Manifest>(hex(row.manifest), 'manifest');
	const { worksheet, readings, evaluation, sections } = manifest;
	await reader.fetch(db, [worksheet, readings, evaluation, ...sections.map((section) => section.part)]);
	const agrees =
		manifest.report === row.reportId &&
		manifest.attempt === row.attempt &&
		manifest.engine === row.engine &&
		Date.parse(manifest.receivedAt) === row.receivedAt.getTime() &&
		Date.parse(manifest.dueAt) === row.dueAt.getTime();
	if (!agrees) throw new DamagedSnapshotError(snapshotId, 'manifest', 'does not tell of this hand-in');
	return {
		id: row.id,
		reportId: row.reportId,
		attempt: row.attempt,
		sha256: hex(row.manifest),
		engine: row.engine,
		receivedAt: row.receivedAt,
		dueAt: row.dueAt,
		sections: sections.map(({ position, key, title, owner, part }) => ({
			position,
			key,
			title,
			owner,
			text: reader.json<string>(part, `section ${position}`)
		})),
		readings: reader.json<Readings>(readings, 'readings'),
		worksheet: fromStored(reader.json<StoredWorksheet>(worksheet, 'worksheet')),
		evaluation: evaluationFromStored(reader.json<StoredEvaluation>(evaluation, 'evaluation'))
	};
}

class PartReader {
	readonly #bytes = new Map<string, Uint8Array | null>();

	constructor(readonly snapshotId: string) {}

	async fetch(db: Database | Transaction, hashes: string[]): Promise<void> {
		const wanted = [...new Set(hashes)].map((hash) => Buffer.from(hash, 'hex'));
		const rows = await db
			.select({ sha256: parts.sha256, bytes: parts.bytes })
			.from(parts)
			.where(wanted.length > 0 ? inArray(parts.sha256, wanted) : sql`false`);
		for (const row of rows) this.#bytes.set(hex(row.sha256), row.bytes);
	}

	json<T>(hash: string, name: string): T {
		const bytes = this.#bytes.get(hash);
		if (bytes === undefined) throw new DamagedSnapshotError(this.snapshotId, name, 'is missing');
		if (bytes === null) throw new DamagedSnapshotError(this.snapshotId, name, 'was erased; its hash is kept');
		if (hex(sha256(bytes)) !== hash) {
			throw new DamagedSnapshotError(this.snapshotId, name, 'differs from its hash');
		}
		return JSON.parse(Buffer.from(bytes).toString('utf8')) as T;
	}
}
