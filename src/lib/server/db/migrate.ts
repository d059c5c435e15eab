import { drizzle } from 'drizzle-orm/postgres-js';
import { migrate as applyMigrations } from 'drizzle-orm/postgres-js/migrator';
import { Logger, runMigrations } from 'graphile-worker';
import postgres from 'postgres';
import { objectionsTo } from './durability';
import { grantStatements } from './grants';

/** Any number, the same in every process: only one migrates at a time. */
const migrationLock = 4_310_001;

export interface MigrationOptions {
	/** As the role that owns the tables. */
	ownerUrl: string;
	/** The role the application runs as; gets its grants anew each time. The owner itself needs none. */
	applicationRole: string;
	/** Folder of the migrations. */
	folder: string;
}

/** The database cannot be used as it is; the message says why and what to do. */
export class UnfitDatabaseError extends Error {}

/** Brings a database up to date: extension, tables, job queue, grants. Repeating it changes nothing. */
export async function migrate(options: MigrationOptions): Promise<{ applied: number }> {
	const sql = postgres(options.ownerUrl, { max: 1, onnotice: () => undefined });
	try {
		const objections = await objectionsTo(sql);
		if (objections.length > 0) throw new UnfitDatabaseError(objections.join('\n'));
		await sql`select pg_advisory_lock(${migrationLock})`;
		// Looked up first: a role that may not create extensions can still migrate where one was created for it.
		const [known] = await sql`select 1 from pg_extension where extname = 'btree_gist'`;
		if (!known) await sql`create extension if not exists btree_gist`;
		const before = await countApplied(sql);
		await applyMigrations(drizzle(sql), { migrationsFolder: options.folder });
		await runMigrations({ connectionString: options.ownerUrl, logger: quiet });
		await grant(sql, options.applicationRole);
		return { applied: (await countApplied(sql)) - before };
	} finally {
		await sql.end();
	}
}

const quiet = new Logger(() => () => undefined);

async function countApplied(sql: postgres.Sql): Promise<number> {
	const [table] = await sql`select to_regclass('drizzle.__drizzle_migrations') as name`;
	if (!table?.['name']) return 0;
	const [row] = await sql<
		{ count: number }[]
	>`select count(*)::int as count from drizzle.__drizzle_migrations`;
	return row?.count ?? 0;
}

async function grant(sql: postgres.Sql, applicationRole: string): Promise<void> {
	const [me] = await sql<{ role: string }[]>`select current_user as role`;
	if (me?.role === applicationRole) return;
	for (const statement of grantStatements(applicationRole)) await sql.unsafe(statement);
	await letWork(sql, applicationRole);
}

/** The job queue's tables have row security without a policy, which hides every row from all but their owner. */
async function letWork(sql: postgres.Sql, applicationRole: string): Promise<void> {
	const guarded = await sql<{ name: string }[]>`
		select c.relname as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
		where n.nspname = 'graphile_worker' and c.relrowsecurity
			and not exists (select 1 from pg_policy p where p.polrelid = c.oid and p.polname = 'application')`;
	for (const { name } of guarded) {
		await sql`create policy application on ${sql(`graphile_worker.${name}`)} for all to ${sql(applicationRole)} using (true) with check (true)`;
	}
}
