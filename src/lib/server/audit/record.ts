import { v7 as uuidv7 } from 'uuid';
import { schema, type Transaction } from '../db';

export interface Recorded {
	/** null: the software itself, or somebody not signed in */
	actorId: string | null;
	courseId?: string | null;
	/** verb in the words of the permission table where there is one: 'report.handIn' */
	action: string;
	subjectKind: string;
	subjectId: string;
	/** small, without secrets */
	detail?: Record<string, unknown>;
}

/** The last step of every verb: who did what to what, in the verb's own transaction. */
export async function record(tx: Transaction, entry: Recorded): Promise<void> {
	await tx.insert(schema.audit).values({
		id: uuidv7(),
		actorId: entry.actorId,
		courseId: entry.courseId ?? null,
		action: entry.action,
		subjectKind: entry.subjectKind,
		subjectId: entry.subjectId,
		detail: entry.detail ?? {}
	});
}
