import postgres from 'postgres';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { appendOnlyTables } from '../../src/lib/server/db/grants';
import { migrate, UnfitDatabaseError } from '../../src/lib/server/db/migrate';
import { freshDatabase, type FreshDatabase } from '../harness';

const folder = new URL('../../drizzle', import.meta.url).pathname;
let fresh: FreshDatabase;
let application: postgres.Sql;
let owner: postgres.Sql;

beforeAll(async () => {
	fresh = await freshDatabase();
	application = postgres(fresh.url, { max: 2 });
	owner = postgres(fresh.ownerUrl, { max: 2, onnotice: () => undefined });
});

afterAll(async () => {
	await application.end();
	await owner.end();
	await fresh.drop();
});

test('a second run applies nothing', async () => {
	const again = await migrate({ ownerUrl: fresh.ownerUrl, applicationRole: 'meniscus_application', folder });
	expect(again.applied).toBe(0);
});

test('two at once both come through', async () => {
	const options = { ownerUrl: fresh.ownerUrl, applicationRole: 'meniscus_application', folder };
	await expect(Promise.all([migrate(options), migrate(options)])).resolves.toHaveLength(2);
});

test('the application role reads every append-only table and can change none', async () => {
	for (const table of appendOnlyTables) {
		await application`select count(*) from ${application(table)}`;
		await expect(application`delete from ${application(table)}`, table).rejects.toThrow(/permission denied/);
	}
});

test('the application role can neither create nor drop tables', async () => {
	await expect(application`create table extra (n int)`).rejects.toThrow(/permission denied/);
	await expect(application`drop table users`).rejects.toThrow(/must be owner/);
});

test('the application role queues a job and sees it', async () => {
	await application`select graphile_worker.add_job('check_the_queue', '{}'::json)`;
	const jobs = await application`select task_identifier from graphile_worker.jobs`;
	expect(jobs.map((job) => job['task_identifier'])).toContain('check_the_queue');
});

test('a database without durable commits is refused', async () => {
	await owner`alter role meniscus_owner in database ${owner(fresh.name)} set synchronous_commit = off`;
	const refused = migrate({ ownerUrl: fresh.ownerUrl, applicationRole: 'meniscus_application', folder });
	await expect(refused).rejects.toThrow(UnfitDatabaseError);
	await expect(refused).rejects.toThrow(/synchronous_commit/);
});
