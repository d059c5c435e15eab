import { createHash, randomBytes } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import postgres from 'postgres';
import { migrate } from '../src/lib/server/db/migrate';

export { throwAwayCluster, type ThrowAwayCluster } from '../scripts/throw-away';
export { caughtMail, forgetMail, type CaughtMail } from './mail';
export { builtApplication, startServer, type RunningServer, type ServerOptions } from './running-server';

const migrations = new URL('../drizzle', import.meta.url).pathname;
const grants = new URL('../src/lib/server/db/grants.ts', import.meta.url).pathname;

/** Any number: test files that run at once agree on who makes the template. */
const templateLock = 4_310_002;
/** An autovacuum worker may be at work in the database: it is the superuser's, and leaves by itself. */
const notOurs = '42501';
const dropTries = 60;

export interface FreshDatabase {
	name: string;
	/** As the application's role. */
	url: string;
	/** As the role that owns the tables. */
	ownerUrl: string;
	/** Cuts its sessions and removes it. */
	drop(): Promise<void>;
}

function maintenance(): { ownerUrl: string; applicationUrl: string } {
	const ownerUrl = process.env['TEST_DATABASE_OWNER_URL'];
	const applicationUrl = process.env['TEST_DATABASE_APPLICATION_URL'];
	if (!ownerUrl || !applicationUrl) {
		throw new Error(
			'There is no test database: only the server and browser projects of vitest start one (tests/services.ts).'
		);
	}
	return { ownerUrl, applicationUrl };
}

const inDatabase = (url: string, name: string) => {
	const changed = new URL(url);
	changed.pathname = `/${name}`;
	return changed.href;
};

/** Named after its content: changed migrations or grants make another one. */
function templateName(): string {
	const hash = createHash('sha256').update(readFileSync(grants));
	for (const file of readdirSync(migrations).sort()) {
		if (file.endsWith('.sql')) hash.update(file).update(readFileSync(join(migrations, file)));
	}
	return `template_${hash.digest('hex').slice(0, 16)}`;
}

/**
 * A migrated database for one test file, copied from a template that is migrated once. Also becomes this process's
 * `DATABASE_URL`, so that server modules imported afterwards use it.
 */
export async function freshDatabase(): Promise<FreshDatabase> {
	const { ownerUrl, applicationUrl } = maintenance();
	const sql = postgres(ownerUrl, { max: 1, onnotice: () => undefined });
	const template = templateName();
	const name = `test_${randomBytes(6).toString('hex')}`;
	try {
		await sql`select pg_advisory_lock(${templateLock})`;
		const [known] = await sql`select 1 from pg_database where datname = ${template}`;
		if (!known) {
			const making = `${template}_making`;
			await sql`drop database if exists ${sql(making)}`;
			await sql`create database ${sql(making)}`;
			await migrate({
				ownerUrl: inDatabase(ownerUrl, making),
				applicationRole: decodeURIComponent(new URL(applicationUrl).username),
				folder: migrations
			});
			await sql`alter database ${sql(making)} rename to ${sql(template)}`;
		}
		await sql`create database ${sql(name)} template ${sql(template)}`;
	} finally {
		await sql.end();
	}
	process.env['DATABASE_URL'] = inDatabase(applicationUrl, name);
	return {
		name,
		url: inDatabase(applicationUrl, name),
		ownerUrl: inDatabase(ownerUrl, name),
		async drop() {
			const again = postgres(ownerUrl, { max: 1, onnotice: () => undefined });
			try {
				for (let left = dropTries; ; left--) {
					try {
						await again`drop database if exists ${again(name)} with (force)`;
						return;
					} catch (problem) {
						if (left === 0 || !(problem instanceof postgres.PostgresError) || problem.code !== notOurs)
							throw problem;
						await new Promise((resolve) => setTimeout(resolve, 250));
					}
				}
			} finally {
				await again.end();
			}
		}
	};
}
