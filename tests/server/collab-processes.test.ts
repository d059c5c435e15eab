import { fork, type ChildProcess } from 'node:child_process';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { readReadings, readText, sectionText, setCell, insertRows } from '../../src/lib/collab';
import { closeDatabase, database } from '../../src/lib/server/db';
import * as readings from '../../src/lib/server/readings';
import type { LiveConnection } from '../../src/lib/state/live-connection';
import { freshDatabase, type FreshDatabase } from '../harness';
import { makeBench } from './live-course';
import { content, openClient, until } from './live-people';
import { smallRedis } from './small-redis';

let fresh: FreshDatabase;
const running: ChildProcess[] = [];
const clients: LiveConnection<unknown>[] = [];

beforeAll(async () => {
	fresh = await freshDatabase();
});
afterEach(async () => {
	for (const client of clients.splice(0)) client.destroy();
	for (const child of running.splice(0)) await killed(child);
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

async function startProcess(redisUrl?: string): Promise<{ child: ChildProcess; url: string }> {
	const child = fork('tests/server/live-process.ts', [fresh.url, ...(redisUrl ? [redisUrl] : [])], {
		execArgv: ['--import', 'tsx'],
		stdio: ['ignore', 'ignore', 'inherit', 'ipc']
	});
	running.push(child);
	const url = await new Promise<string>((resolve, reject) => {
		child.once('message', (message) => resolve(String(message)));
		child.once('exit', (code) => reject(new Error(`the process ended (${code}) before it listened`)));
	});
	return { child, url };
}

async function killed(child: ChildProcess): Promise<void> {
	if (child.exitCode !== null || child.signalCode !== null) return;
	const gone = new Promise((resolve) => child.once('exit', resolve));
	child.kill('SIGKILL');
	await gone;
}

const join = (server: { url: string }, person: { id: string }, documentId: string) => {
	const client = openClient(server, { person: person.id, documentId });
	clients.push(client);
	return client;
};
const stored = (client: LiveConnection<unknown>) => until('stored', () => client.state === 'stored', 20_000);

describe('two processes on one database', () => {
	it(
		'show each other the edits, and one killed hard takes nothing confirmed along',
		{ timeout: 120_000 },
		async () => {
			const bench = await makeBench();
			const [a, b] = await Promise.all([startProcess(), startProcess()]);
			const student = join(a, bench.student, bench.readingsId);
			const mate = join(b, bench.mate, bench.readingsId);
			await Promise.all([stored(student), stored(mate)]);
			insertRows(student.doc, 'readings', [{ id: 'one', cells: { p: '756.2' } }]);
			insertRows(mate.doc, 'readings', [{ id: 'two', cells: { p: '400.0' } }]);
			await Promise.all([stored(student), stored(mate)]);
			await until(
				'equal',
				() => JSON.stringify(content(student.doc)) === JSON.stringify(content(mate.doc)),
				20_000
			);
			expect(readReadings(mate.doc, ['readings']).tables['readings']).toHaveLength(2);

			// Killed while somebody types: what was confirmed is in the log, the rest is still with the writer.
			let confirmed = 0;
			for (let n = 1; n <= 40; n += 1) {
				setCell(student.doc, 'readings', 'one', 'p', String(n));
				if (n === 20) {
					await stored(student);
					confirmed = n;
				}
				if (n === 30) await killed(a.child);
			}
			const log = await readings.storedDocument(database(), bench.readingsId);
			const inLog = Number(
				readReadings(log.doc, ['readings']).tables['readings']?.find(({ id }) => id === 'one')?.cells['p']
			);
			expect(inLog).toBeGreaterThanOrEqual(confirmed);
			await until('offline', () => student.state === 'offline', 20_000);

			// The same page goes on at another process, as behind a balancer.
			const again = openClient(b, { person: bench.student.id, documentId: bench.readingsId });
			clients.push(again);
			await stored(again);
			setCell(again.doc, 'readings', 'one', 'p', '41');
			await stored(again);
			await until(
				'equal',
				() => JSON.stringify(content(again.doc)) === JSON.stringify(content(mate.doc)),
				20_000
			);
		}
	);

	it(
		'ring each other through Redis where it is set, and through PostgreSQL when it goes away',
		{ timeout: 120_000 },
		async () => {
			const bench = await makeBench();
			const redis = await smallRedis();
			const [a, b] = await Promise.all([startProcess(redis.url), startProcess(redis.url)]);
			const student = join(a, bench.student, bench.resultsId);
			const mate = join(b, bench.mate, bench.resultsId);
			await Promise.all([stored(student), stored(mate)]);
			sectionText(student.doc).insert(0, 'One. ');
			await until('arrived', () => readText(mate.doc) === 'One. ', 20_000);
			expect(redis.published.some((message) => message.includes(bench.resultsId))).toBe(true);
			await redis.close();
			sectionText(mate.doc).insert(sectionText(mate.doc).length, 'Two.');
			await until('arrived', () => readText(student.doc) === 'One. Two.', 20_000);
			await Promise.all([stored(student), stored(mate)]);
		}
	);
});
