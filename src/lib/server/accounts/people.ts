import { eq, sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { schema, type Database, type Transaction } from '../db';

const { users } = schema;
export type Person = typeof users.$inferSelect;

export async function personByEmail(db: Database | Transaction, email: string): Promise<Person | undefined> {
	const [person] = await db.select().from(users).where(eq(users.email, email));
	return person;
}

/** Locks a person's row: two changes of one account follow each other. */
export async function lockPerson(tx: Transaction, id: string): Promise<Person> {
	const [person] = await tx.select().from(users).where(eq(users.id, id)).for('update');
	if (!person) throw new Error('a session without a person');
	return person;
}

/**
 * Makes the account of somebody whose address is confirmed by the link they opened. A row without a password (from a
 * list of names) becomes theirs. Null when the address has an account already.
 */
export async function makeAccount(
	tx: Transaction,
	given: { email: string; name: string; initials: string; passwordHash: string }
): Promise<Person | null> {
	const [person] = await tx
		.insert(users)
		.values({ id: uuidv7(), ...given, emailVerifiedAt: sql`now()` })
		.onConflictDoUpdate({
			target: users.email,
			set: { ...given, emailVerifiedAt: sql`now()` },
			setWhere: sql`${users.passwordHash} is null`
		})
		.returning();
	return person ?? null;
}
