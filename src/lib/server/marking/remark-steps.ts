import { desc, eq } from 'drizzle-orm';
import type { RemarkKind } from '$lib/contracts/marking';
import * as audit from '../audit';
import type { Act } from '../auth';
import { schema, type Transaction } from '../db';
import { courseOfMarking, raiseRevision, type MarkingRow } from './steps';

const { remarkRevisions } = schema;

export interface Words {
	kind: RemarkKind;
	body: string;
	deleted: boolean;
}

/** The newest revision of a remark; null when it has none. */
export async function newestRevision(
	tx: Transaction,
	remarkId: string
): Promise<(Words & { n: number }) | null> {
	const [row] = await tx
		.select()
		.from(remarkRevisions)
		.where(eq(remarkRevisions.remarkId, remarkId))
		.orderBy(desc(remarkRevisions.n))
		.limit(1);
	return row ? { n: row.n, kind: row.kind as RemarkKind, body: row.body, deleted: row.deleted } : null;
}

export const sameWords = (a: Words, b: Words): boolean =>
	a.kind === b.kind && a.body === b.body && a.deleted === b.deleted;

/**
 * Writes the next revision of a remark. The table is append-only for everyone, so revisions that follow each other while
 * a remark is typed are not joined here: the page sends a remark once the typing rests, and every one it sent is kept.
 */
export async function writeRevision(
	tx: Transaction,
	act: Act,
	marking: MarkingRow,
	remarkId: string,
	words: Words & { n: number }
): Promise<void> {
	await tx.insert(remarkRevisions).values({ remarkId, ...words, byId: act.viewer.id });
	await raiseRevision(tx, marking.id);
	await audit.record(tx, {
		actorId: act.viewer.id,
		courseId: await courseOfMarking(tx, marking.id),
		action: words.deleted ? 'remark.delete' : words.n === 1 ? 'remark.add' : 'remark.revise',
		subjectKind: 'remark',
		subjectId: remarkId,
		detail: { n: words.n, kind: words.kind }
	});
}
