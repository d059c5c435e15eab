import { drizzle, type PostgresJsDatabase } from 'drizzle-orm/postgres-js';
import postgres from 'postgres';
import { env } from '../env';
import * as schema from './schema';

export type Database = PostgresJsDatabase<typeof schema>;
/** What a verb's steps get: the same interface, inside the verb's one transaction. */
export type Transaction = Parameters<Parameters<Database['transaction']>[0]>[0];

export interface Connection {
	sql: postgres.Sql;
	db: Database;
	close(): Promise<void>;
}

/**
 * Seconds before a lost connection is tried again. `failures` is counted over the whole pool, so the driver's own doubling
 * reaches its twenty seconds within the first second of an outage, and the pool then sleeps on while the database is back.
 */
export const reconnectAfter = (failures: number): number => Math.min(0.5, 0.05 * (failures + 1));

/** Opens a pool. `max` connections; times are instants, so the session's zone is UTC. */
export function connect(url: string, max = 10): Connection {
	const sql = postgres(url, {
		max,
		backoff: reconnectAfter,
		onnotice: () => undefined,
		connection: { TimeZone: 'UTC', application_name: 'meniscus' }
	});
	return { sql, db: drizzle(sql, { schema }), close: () => sql.end({ timeout: 5 }) };
}

let shared: Connection | undefined;

/** The process's own pool, opened at first use. */
export function connection(): Connection {
	shared ??= connect(env().DATABASE_URL);
	return shared;
}

export const database = (): Database => connection().db;

export async function closeDatabase(): Promise<void> {
	await shared?.close();
	shared = undefined;
}
