import postgres from 'postgres';
import { afterAll } from 'vitest';
import { closeDatabase } from '../../src/lib/server/db';
import { freshDatabase } from '../harness';

/** A database for this file alone, gone after its tests; the answer speaks in it as the role that owns the tables. */
export async function ownDatabase(): Promise<postgres.Sql> {
	const fresh = await freshDatabase();
	const owner = postgres(fresh.ownerUrl, { max: 2, onnotice: () => undefined });
	afterAll(async () => {
		await owner.end();
		await closeDatabase();
		await fresh.drop();
	});
	return owner;
}
