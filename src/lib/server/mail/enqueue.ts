import { sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { schema, type Transaction } from '../db';
import type { LetterKind, PayloadOf } from './letters';

export interface Said<K extends LetterKind> {
	kind: K;
	/** what it is about, such as a report's id and attempt: nobody is told the same of it twice */
	subject: string;
	/** e-mail address */
	recipient: string;
	payload: PayloadOf<K>;
}

/**
 * Puts a letter into the outbox and a delivery into the job queue, in the transaction of what it tells about: neither is
 * there without the other. Repeating the same (kind, subject, recipient) changes nothing.
 */
export async function enqueue<K extends LetterKind>(tx: Transaction, said: Said<K>): Promise<void> {
	const [row] = await tx
		.insert(schema.outbox)
		.values({ id: uuidv7(), ...said })
		.onConflictDoNothing()
		.returning({ id: schema.outbox.id });
	if (row) await addDelivery(tx, row.id);
}

/** Longest chain of tries of one delivery: with the queue's back-off about a day. */
const deliveryTries = 14;

/** The queue holds one delivery for each letter, whoever asks for it. */
export async function addDelivery(tx: Pick<Transaction, 'execute'>, outboxId: string): Promise<void> {
	await tx.execute(
		sql`select graphile_worker.add_job('deliver', json_build_object('id', ${outboxId}::text), job_key := ${`deliver:${outboxId}`}, max_attempts := ${deliveryTries}::int)`
	);
}
