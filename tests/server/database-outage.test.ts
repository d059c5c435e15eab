import { fork, type ChildProcess } from 'node:child_process';
import { connect as connectTo, createServer, type AddressInfo } from 'node:net';
import postgres from 'postgres';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { closeDatabase, connect, database } from '../../src/lib/server/db';
import * as jobs from '../../src/lib/server/jobs';
import { freshDatabase, throwAwayCluster, type FreshDatabase, type ThrowAwayCluster } from '../harness';
import { killCluster } from '../kill-cluster';

const outer = {
	owner: process.env['TEST_DATABASE_OWNER_URL'],
	application: process.env['TEST_DATABASE_APPLICATION_URL']
};
const rounds = 10;
const perRound = 60;
const patience = 30_000;

let cluster: ThrowAwayCluster;
let fresh: FreshDatabase;
let child: ChildProcess;
const did = new Map<string, number>();
let output = '';

beforeAll(async () => {
	// A cluster of its own: this one is killed.
	cluster = await throwAwayCluster();
	process.env['TEST_DATABASE_OWNER_URL'] = cluster.ownerUrl();
	process.env['TEST_DATABASE_APPLICATION_URL'] = cluster.applicationUrl('postgres');
	fresh = await freshDatabase();
	child = fork('tests/server/jobs-process.ts', [fresh.url], {
		execArgv: ['--import', 'tsx'],
		stdio: ['ignore', 'pipe', 'pipe', 'ipc']
	});
	const collect = (chunk: Buffer) => (output += chunk.toString());
	child.stdout?.on('data', collect);
	child.stderr?.on('data', collect);
	await new Promise<void>((resolve, reject) => {
		child.once('exit', () => reject(new Error(`it ended before it began:\n${output}`)));
		child.on('message', (said: { ready?: true; did?: string }) => {
			if (said.ready) resolve();
			if (said.did) did.set(said.did, (did.get(said.did) ?? 0) + 1);
		});
	});
});
afterAll(async () => {
	child.kill('SIGKILL');
	await closeDatabase();
	process.env['TEST_DATABASE_OWNER_URL'] = outer.owner;
	process.env['TEST_DATABASE_APPLICATION_URL'] = outer.application;
	await cluster.remove();
});

async function until(what: string, so: () => boolean | Promise<boolean>): Promise<void> {
	const end = Date.now() + patience;
	while (!(await so())) {
		if (child.exitCode !== null)
			throw new Error(`The process ended (${child.exitCode}):\n${output.slice(-9_000)}`);
		if (Date.now() > end) throw new Error(`not ${what} within ${patience} ms:\n${output.slice(-9_000)}`);
		await new Promise((resolve) => setTimeout(resolve, 20));
	}
}

async function asSuperuser(work: (sql: postgres.Sql) => Promise<unknown>): Promise<void> {
	const sql = postgres(cluster.superuserUrl(fresh.name), { max: 1, onnotice: () => undefined });
	try {
		await work(sql);
	} finally {
		await sql.end();
	}
}

it(
	'outlives a database that goes away while tasks are being finished, and does every task in the end',
	{ timeout: 240_000 },
	async () => {
		for (let round = 0; round < rounds; round++) {
			const before = did.size;
			await asSuperuser(
				(sql) => sql`
					select graphile_worker.add_job(
						case when n % 2 = 0 then 'succeed' else 'fail' end,
						json_build_object('name', ${`${round}:`}::text || n), max_attempts := 2)
					from generate_series(1, ${perRound}) n`
			);
			// In the middle of its work, where each next moment is one of taking, doing or finishing.
			await until('at work', () => did.size > before + 5 + round);
			if (round % 2 === 0) {
				await asSuperuser(
					(sql) => sql`
						select pg_terminate_backend(pid) from pg_stat_activity
						where datname = ${fresh.name} and pid <> pg_backend_pid()`
				);
			} else {
				await killCluster(cluster.pid);
				await cluster.restart();
			}
		}
		// What a lost connection left locked comes back by the same rule as in production, with less patience.
		const all = Array.from({ length: rounds }, (_, round) =>
			Array.from({ length: perRound }, (_, n) => `${round}:${n + 1}`)
		).flat();
		await until('all done', async () => {
			await jobs.freeAbandoned(database(), '2 seconds').catch(() => undefined);
			await new Promise((resolve) => setTimeout(resolve, 500));
			return all.every((name) => did.has(name));
		});
		expect(child.exitCode).toBeNull();
		expect(output).toContain('it is taken up again');
	}
);

it('answers from its pool as soon as the database is back, however often it was asked meanwhile', async () => {
	const ask = () => database().execute('select 1');
	await Promise.all(Array.from({ length: 20 }, ask));
	await killCluster(cluster.pid);
	for (const end = Date.now() + 2_000; Date.now() < end;) {
		const answers = await Promise.allSettled(Array.from({ length: 20 }, ask));
		expect(answers.every(({ status }) => status === 'rejected')).toBe(true);
	}
	await cluster.restart();
	const back = Date.now();
	await until('answered', () => Promise.all(Array.from({ length: 10 }, ask)).then(Boolean, () => false));
	expect(Date.now() - back).toBeLessThan(5_000);
});

it('tells only whoever asked when a connection is lost while it is being set up', async () => {
	const unowned: unknown[] = [];
	const note = (thrown: unknown) => void unowned.push(thrown);
	process.on('unhandledRejection', note);
	// Between driver and database; cuts the line at the driver's own first query, and lets the second try through.
	let cuts = 1;
	const between = createServer((fromDriver) => {
		const toDatabase = connectTo(cluster.port, '127.0.0.1');
		fromDriver.on('error', () => toDatabase.destroy()).on('close', () => toDatabase.destroy());
		toDatabase.on('error', () => fromDriver.destroy()).on('close', () => fromDriver.destroy());
		toDatabase.pipe(fromDriver);
		fromDriver.on('data', (chunk: Buffer) => {
			if (chunk.includes('pg_catalog.pg_type') && cuts-- > 0) fromDriver.resetAndDestroy();
			else toDatabase.write(chunk);
		});
	});
	await new Promise<void>((resolve) => between.listen(0, '127.0.0.1', resolve));
	const url = new URL(fresh.url);
	url.port = String((between.address() as AddressInfo).port);
	const { sql, close } = connect(url.href, 1);
	try {
		await expect(sql`select 1 as one`).rejects.toThrow();
		expect([...(await sql`select array['a', 'b'] as list`)]).toEqual([{ list: ['a', 'b'] }]);
		await new Promise((resolve) => setTimeout(resolve, 50));
		expect(unowned).toEqual([]);
	} finally {
		await close();
		between.close();
		process.off('unhandledRejection', note);
	}
});
