import { createHash } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { Refusal } from '../errors';
import { database, type Transaction } from './client';
import { idempotency } from './schema';

/** What a repeated write carries: the client's key and the hash of what it asked. */
export interface Repeatable {
	userId: string;
	key: string;
	requestSha256: Uint8Array;
}

/** Hash of a request for the idempotency table: method, address and body. */
export function requestDigest(method: string, path: string, body: string): Uint8Array {
	return createHash('sha256').update(`${method} ${path}\n${body}`).digest();
}

/**
 * Runs a verb's one transaction. With a `repeatable`, the row is inserted first, so that a second request with the same
 * key waits for the first and then gets the first one's answer; the answer is stored in the effect's own transaction.
 * Errors: Refusal 'unprocessable' when the key was used for another request.
 */
export async function transact<T>(
	repeatable: Repeatable | undefined,
	change: (tx: Transaction) => Promise<T>
): Promise<T> {
	return database().transaction(async (tx) => {
		if (!repeatable) return change(tx);
		const { userId, key, requestSha256 } = repeatable;
		const inserted = await tx
			.insert(idempotency)
			.values({ userId, key, requestSha256 })
			.onConflictDoNothing()
			.returning({ key: idempotency.key });
		const sameKey = and(eq(idempotency.userId, userId), eq(idempotency.key, key));
		if (inserted.length === 0) {
			const [earlier] = await tx.select().from(idempotency).where(sameKey);
			if (!earlier || Buffer.compare(Buffer.from(earlier.requestSha256), Buffer.from(requestSha256)) !== 0) {
				throw new Refusal(
					'unprocessable',
					'This Idempotency-Key was used for another request. Send a new key.'
				);
			}
			return (earlier.response as { value: T }).value;
		}
		const value = await change(tx);
		await tx.update(idempotency).set({ response: { value } }).where(sameKey);
		return value;
	});
}
