import postgres from 'postgres';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { encodeDocument, readReadings, readText } from './stored-document';
import { seededRandom } from '../../scripts/demo/random';
import { openSession } from '../../src/lib/server/auth';
import { closeDatabase, database } from '../../src/lib/server/db';
import * as reports from '../../src/lib/server/reports';
import {
	freshDatabase,
	startServer,
	throwAwayCluster,
	type RunningServer,
	type ThrowAwayCluster
} from '../harness';
import { isRunning, killCluster } from '../kill-cluster';
import {
	emptyLedger,
	handInAgain,
	markAlong,
	openLive,
	writeRows,
	writeWords,
	type Actor,
	type Place
} from './kill-actors';
import { makeScene } from './scene';

/**
 * Server and database are killed at random moments under two writers, one hand-in and one marking. What was confirmed to
 * anyone outside is kept in a ledger here; in the end nothing confirmed is missing and nothing is there twice.
 */
const kills = Number(process.env['KILLS'] ?? 200);
const seed = 20_261;
/** How often nobody waits until everybody is at work again: the kill then falls somewhere into their coming back. */
const early = 0.25;
const longestPauseMs = 300;
/** A late return to work is not what this test is about; the kill then comes anyway, and counts as an early one. */
const patienceMs = 15_000;

const outer = {
	owner: process.env['TEST_DATABASE_OWNER_URL'],
	application: process.env['TEST_DATABASE_APPLICATION_URL']
};
let cluster: ThrowAwayCluster;

beforeAll(async () => {
	cluster = await throwAwayCluster();
	process.env['TEST_DATABASE_OWNER_URL'] = cluster.ownerUrl();
	process.env['TEST_DATABASE_APPLICATION_URL'] = cluster.applicationUrl('postgres');
});
afterAll(async () => {
	process.env['TEST_DATABASE_OWNER_URL'] = outer.owner;
	process.env['TEST_DATABASE_APPLICATION_URL'] = outer.application;
	await cluster?.remove();
});

async function rows<T extends Record<string, unknown>>(url: string, query: string): Promise<T[]> {
	const sql = postgres(url, { max: 1, onnotice: () => undefined });
	try {
		return [...(await sql.unsafe<T[]>(query))];
	} finally {
		await sql.end();
	}
}

it(`loses and doubles nothing over ${kills} kills`, { timeout: 1_500_000 }, async () => {
	const fresh = await freshDatabase();
	// One course is written in, another one marked, a third one handed in: no actor's change is another's conflict.
	const written = await makeScene('draft');
	const marked = await makeScene('handed in');
	const handed = await makeScene('draft');
	const cookieFor = async (id: string) => {
		const cookie = await openSession(database(), id, 'kill test');
		return `${cookie.name}=${cookie.value}`;
	};
	const ports = { server: undefined as number | undefined };
	let server: RunningServer = await startServer({ databaseUrl: fresh.url });
	ports.server = server.port;
	const as = async (id: string): Promise<Place> => ({ origin: server.origin, cookie: await cookieFor(id) });
	const report = await reports.openReport(written.student, written.workId);
	const results = report.sections.find((section) => section.key === 'results');
	const abstract = report.sections.find((section) => section.key === 'abstract');
	if (!results || !abstract) throw new Error('sections are missing');
	const snapshot = await reports.readSnapshot(database(), marked.snapshot);
	const anchor = {
		section: snapshot.sections[0]?.position ?? 0,
		selectors: [{ type: 'TextPositionSelector', start: 0, end: 5 }],
		links: [],
		projection: 1
	};
	const ledger = emptyLedger();
	const student = await as(written.student.id);
	const mate = await as(written.mate.id);
	const actors: Actor[] = [
		writeWords(openLive(student, results.document, results.epoch, written.student.id), 'a', ledger),
		writeRows(openLive(mate, report.readings.document, report.readings.epoch, written.mate.id), ledger),
		handInAgain(
			await as(handed.student.id),
			handed.report,
			{ engine: handed.engine, results: handed.results },
			ledger
		),
		markAlong(await as(marked.grader.id), marked.marking, marked.criterion, anchor, marked, ledger)
	];
	await closeDatabase();

	const tally = () => ({
		words: ledger.words.length,
		rows: ledger.rows.length,
		handIns: ledger.attempts.length,
		marking: ledger.levels.length + ledger.remarks.length
	});
	/** Waits until each of the four has been told since now that something is stored. Returns whom it waited for in vain. */
	const waitForEveryone = async (patience: number): Promise<string[]> => {
		const before = tally();
		for (const end = Date.now() + patience; ;) {
			const now = tally();
			const missing = (['words', 'rows', 'handIns', 'marking'] as const).filter(
				(who) => now[who] <= before[who]
			);
			if (missing.length === 0 || Date.now() > end) return missing;
			await new Promise((resolve) => setTimeout(resolve, 5));
		}
	};
	const random = seededRandom(seed);
	const count = { server: 0, database: 0, both: 0, atWork: 0 };
	/** kills that came before everyone was back, though there was time */
	const late: string[] = [];
	/** last words of servers that ended without being killed */
	const ownDeaths: string[] = [];
	for (let n = 0; n < kills && !actors.some(({ failed }) => failed); n++) {
		if (random.uniform() >= early) {
			const missing = await waitForEveryone(patienceMs);
			if (missing.length === 0) count.atWork += 1;
			else late.push(`${n}: ${missing.join(', ')}`);
		}
		await new Promise((resolve) => setTimeout(resolve, longestPauseMs * random.uniform()));
		if (!isRunning(server.pid)) ownDeaths.push(server.output().slice(-1_500));
		const which = random.pick(['server', 'database', 'database', 'both'] as const);
		count[which] += 1;
		if (which !== 'server') {
			await killCluster(cluster.pid);
			if (which === 'both') await server.kill();
			await cluster.restart();
		} else await server.kill();
		if (which !== 'database') server = await startServer({ databaseUrl: fresh.url, port: ports.server });
	}
	// Everyone gets their last answer.
	const stuck = await waitForEveryone(6 * patienceMs);
	for (const actor of actors) await actor.stop();
	await server.stop();

	const text = readText(await encodeDocument(fresh.url, results.document));
	const table = readReadings(await encodeDocument(fresh.url, report.readings.document));
	const counts = (all: string[]) =>
		all.reduce((map, one) => map.set(one, (map.get(one) ?? 0) + 1), new Map<string, number>());
	const words = counts(text.match(/<a\d+>/g) ?? []);
	const ids = counts(table.map(({ id }) => id));
	const attempts = await rows<{ id: string; attempt: number; sha256: string }>(
		fresh.ownerUrl,
		`select id, attempt, encode(manifest, 'hex') as sha256 from snapshots where report_id = '${handed.report}' order by attempt`
	);
	const remarks = await rows<{ id: string; body: string; n: number }>(
		fresh.ownerUrl,
		`select remark_id as id, body, n from remark_revisions v join remarks r on r.id = v.remark_id where r.marking_id = '${marked.marking}'`
	);
	const levels = await rows<{ level: number }>(
		fresh.ownerUrl,
		`select level from score_events where marking_id = '${marked.marking}' and criterion_id = '${marked.criterion}' order by n`
	);
	console.log(
		[
			`${kills} kills (server ${count.server}, database ${count.database}, both ${count.both})`,
			`everyone at work at ${count.atWork}, not back in time at ${late.length} ${late.join('; ')}`,
			`confirmed: ${ledger.words.length} words, ${ledger.rows.length} rows, ${ledger.attempts.length} hand-ins, ` +
				`${ledger.levels.length} levels, ${ledger.remarks.length} remarks`
		].join('\n')
	);
	expect(ownDeaths).toEqual([]);
	expect(stuck).toEqual([]);
	// Missing
	expect(ledger.words.filter((word) => !words.has(word))).toEqual([]);
	expect(ledger.rows.filter((id) => !ids.has(id))).toEqual([]);
	const bySnapshot = new Map(attempts.map(({ id, sha256 }) => [id, sha256]));
	expect(ledger.attempts.filter(({ id, sha256 }) => bySnapshot.get(id) !== sha256)).toEqual([]);
	const byRemark = new Map(remarks.map(({ id, body }) => [id, body]));
	expect(ledger.remarks.filter(({ id, body }) => byRemark.get(id) !== body)).toEqual([]);
	expect(levels.slice(0, ledger.levels.length).map(({ level }) => level)).toEqual(ledger.levels);
	// Doubled
	expect([...words].filter(([, times]) => times > 1)).toEqual([]);
	expect([...ids].filter(([, times]) => times > 1)).toEqual([]);
	expect(attempts.map(({ attempt }) => attempt)).toEqual(attempts.map((_, index) => index + 1));
	expect(new Set(ledger.attempts.map(({ id }) => id)).size).toBe(ledger.attempts.length);
	// One more of each may have been stored without its answer arriving.
	expect(attempts.length - ledger.attempts.length).toBeLessThanOrEqual(1);
	expect(levels.length - ledger.levels.length).toBeLessThanOrEqual(1);
	expect(remarks.length - 1 - ledger.remarks.length).toBeLessThanOrEqual(1);
	expect(remarks.every(({ n }) => n === 1)).toBe(true);
	// It was a test of something: most kills found all four in the middle of their work.
	expect(count.atWork).toBeGreaterThan(kills / 2);
	for (const kind of ['server', 'database', 'both'] as const)
		expect(count[kind]).toBeGreaterThanOrEqual(Math.floor(kills / 10));
});
