import { sql } from 'drizzle-orm';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import * as Y from 'yjs';
import { insertRows, readText, sectionText, setCell } from '../../src/lib/collab';
import { closeDatabase, connect, database } from '../../src/lib/server/db';
import { openLive, UnfitForLiveError } from '../../src/lib/server/collab/live';
import * as readings from '../../src/lib/server/readings';
import type { LiveConnection, LocalCopies } from '../../src/lib/state/live-connection';
import { freshDatabase, type FreshDatabase } from '../harness';
import { makeBench, type Bench } from './live-course';
import { content, openClient, origin, serveLive, socketOf, until, type LiveServer } from './live-people';

let fresh: FreshDatabase;
let bench: Bench;
const servers: LiveServer[] = [];
const clients: LiveConnection<unknown>[] = [];

const serve = async (over: Parameters<typeof serveLive>[1] = {}) => {
	const server = await serveLive(fresh.url, over);
	servers.push(server);
	return server;
};
const join = (server: LiveServer, person: { id: string }, documentId: string, local?: LocalCopies) => {
	const client = openClient(server, { person: person.id, documentId, local: local ?? null });
	clients.push(client);
	return client;
};
const stored = (client: LiveConnection<unknown>) => until('stored', () => client.state === 'stored');
const type = (client: LiveConnection<unknown>, text: string) => {
	const shared = sectionText(client.doc);
	shared.insert(shared.length, text);
};
const textInLog = async (documentId: string) => {
	const { doc } = await readings.storedDocument(database(), documentId);
	return readText(doc);
};

beforeAll(async () => {
	fresh = await freshDatabase();
});
beforeEach(async () => {
	bench = await makeBench();
});
afterEach(async () => {
	for (const client of clients.splice(0)) client.destroy();
	for (const server of servers.splice(0)) await server.close();
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

describe('stored', () => {
	it('is said when the edit stands in the log, and others see it meanwhile', async () => {
		const server = await serve();
		const one = join(server, bench.student, bench.resultsId);
		const two = join(server, bench.mate, bench.resultsId);
		await Promise.all([stored(one), stored(two)]);
		type(one, 'The boiling point rose.');
		expect(one.state).toBe('storing');
		await stored(one);
		expect(await textInLog(bench.resultsId)).toBe('The boiling point rose.');
		await until('arrived', () => readText(two.doc) === 'The boiling point rose.');
		expect(two.state).toBe('stored');
	});

	it('is not said while the commit waits, though team mates see the text', async () => {
		const server = await serve();
		const one = join(server, bench.student, bench.resultsId);
		const two = join(server, bench.mate, bench.resultsId);
		await Promise.all([stored(one), stored(two)]);
		const holder = connect(fresh.url, 1);
		let release: () => void = () => undefined;
		const held = holder.sql.begin(async (tx) => {
			await tx`select 1 from documents where id = ${bench.resultsId} for update`;
			await new Promise<void>((resolve) => (release = resolve));
		});
		await until('held', async () => {
			const [row] = await database().execute<{ n: number }>(
				sql`select count(*)::int as n from pg_stat_activity where datname = current_database() and state = 'idle in transaction'`
			);
			return (row?.n ?? 0) > 0;
		});
		type(one, 'Waiting.');
		await until('arrived', () => readText(two.doc) === 'Waiting.');
		await new Promise((resolve) => setTimeout(resolve, 500));
		expect(one.state).toBe('storing');
		expect(await textInLog(bench.resultsId)).toBe('');
		release();
		await held;
		await stored(one);
		expect(await textInLog(bench.resultsId)).toBe('Waiting.');
		await holder.close();
	});

	it('covers deletions, which leave the state vector as it was', async () => {
		const server = await serve();
		const one = join(server, bench.student, bench.resultsId);
		await stored(one);
		type(one, 'abcdef');
		await stored(one);
		sectionText(one.doc).delete(1, 4);
		expect(one.state).toBe('storing');
		await stored(one);
		expect(await textInLog(bench.resultsId)).toBe('af');
	});

	it('survives the loss of every socket and of the process', async () => {
		const first = await serve();
		const port = Number(new URL(first.url).port);
		const one = join(first, bench.student, bench.resultsId);
		await stored(one);
		type(one, 'Before. ');
		await stored(one);
		first.cut();
		type(one, 'While cut. ');
		await until('offline', () => one.state === 'offline');
		expect(one.waiting).toBeGreaterThan(0);
		await stored(one);
		expect(await textInLog(bench.resultsId)).toBe('Before. While cut. ');
		servers.splice(servers.indexOf(first), 1);
		await first.close();
		await until('offline', () => one.state === 'offline');
		type(one, 'While down. ');
		await serve({ port });
		await stored(one);
		expect(await textInLog(bench.resultsId)).toBe('Before. While cut. While down. ');
	});

	it('waits for a database that went away, and keeps the order', async () => {
		const server = await serve();
		const one = join(server, bench.student, bench.resultsId);
		await stored(one);
		type(one, '1 ');
		await stored(one);
		const owner = connect(fresh.ownerUrl, 1);
		for (let n = 2; n < 8; n += 1) {
			type(one, `${n} `);
			await owner.sql`select pg_terminate_backend(pid) from pg_stat_activity
				where datname = current_database() and application_name = 'meniscus' and pid <> pg_backend_pid()`.catch(
				() => undefined
			);
		}
		await owner.close();
		await until('stored', () => one.state === 'stored', 20_000);
		expect(await textInLog(bench.resultsId)).toBe('1 2 3 4 5 6 7 ');
	});
});

describe('who may', () => {
	it('open the socket: a page of ours, signed in', async () => {
		const server = await serve();
		const attempt = (person: string, from: string, path = '/live') =>
			new Promise<string>((resolve) => {
				const socket = new (socketOf(person, from))(server.url.replace('/live', path));
				socket.on('open', () => resolve('open'));
				socket.on('unexpected-response', (_request, response) => resolve(String(response.statusCode)));
			});
		expect(await attempt(bench.student.id, origin)).toBe('open');
		expect(await attempt(bench.student.id, 'http://elsewhere.test')).toBe('403');
		expect(await attempt('nobody', origin)).toBe('401');
		expect(await attempt(bench.student.id, origin, '/other')).toBe('404');
	});

	it('read, and who may not', async () => {
		const server = await serve();
		const mate = join(server, bench.mate, bench.abstractId);
		const stranger = join(server, bench.stranger, bench.resultsId);
		await until('refused', () => mate.state === 'refused' && stranger.state === 'refused');
		expect([mate.refusal, stranger.refusal]).toEqual(['not-yours', 'not-yours']);
	});

	it('only read: edits of staff go nowhere', async () => {
		const server = await serve();
		const grader = join(server, bench.grader, bench.readingsId);
		const student = join(server, bench.student, bench.readingsId);
		await until('read-only', () => grader.state === 'read-only');
		await stored(student);
		insertRows(student.doc, 'readings', [{ id: 'r1', cells: { p: '756.2' } }]);
		await until(
			'arrived',
			() => JSON.stringify(content(grader.doc)) === JSON.stringify(content(student.doc))
		);
		setCell(grader.doc, 'readings', 'r1', 'p', '1');
		await stored(student);
		await new Promise((resolve) => setTimeout(resolve, 200));
		expect(content(student.doc).readings).toMatchObject({
			tables: { readings: [{ cells: { p: '756.2' } }] }
		});
		const { doc } = await readings.storedDocument(database(), bench.readingsId);
		expect(content(doc)).toEqual(content(student.doc));
	});

	it('stay: a revoked membership ends at the doorbell, a session in the sweep', async () => {
		const server = await serve({ sweepMs: { log: 60_000, permissions: 200 } });
		const mate = join(server, bench.mate, bench.resultsId);
		const student = join(server, bench.student, bench.resultsId);
		await Promise.all([stored(mate), stored(student)]);
		await database().transaction(async (tx) => {
			await tx.execute(
				sql`update team_members set during = tstzrange(lower(during), now()) where user_id = ${bench.mate.id}`
			);
			await tx.execute(sql`select pg_notify('meniscus_revoke', ${bench.mate.id})`);
		});
		await until('refused', () => mate.refusal === 'not-yours');
		expect(student.state).toBe('stored');
		server.signedOut.add(bench.student.id);
		await until('signed out', () => student.refusal === 'signed-out');
	});
});

describe('a refused edit', () => {
	it('ends the epoch; everybody goes on in a fresh document, and the writer is offered what was not taken', async () => {
		const server = await serve();
		const student = join(server, bench.student, bench.resultsId);
		const mate = join(server, bench.mate, bench.resultsId);
		await Promise.all([stored(student), stored(mate)]);
		type(student, 'Kept. ');
		await stored(student);
		await until('arrived', () => readText(mate.doc) === 'Kept. ');
		// The right goes without a doorbell: the append itself has to notice.
		await database().execute(
			sql`update team_members set during = tstzrange(lower(during), now()) where user_id = ${bench.mate.id}`
		);
		const before = mate.doc;
		type(mate, 'Too late.');
		await until('new epoch', () => student.epoch === 2);
		await stored(student);
		expect(readText(student.doc)).toBe('Kept. ');
		await until('turned away', () => mate.refusal === 'not-yours');
		expect(mate.doc).not.toBe(before);
		expect(mate.unsent).toMatchObject({ here: { text: 'Kept. Too late.' } });
		expect(await textInLog(bench.resultsId)).toBe('Kept. ');
		type(student, 'Goes on.');
		await stored(student);
		expect(await textInLog(bench.resultsId)).toBe('Kept. Goes on.');
	});

	it('offers the difference when the document was frozen meanwhile', async () => {
		const server = await serve();
		const student = join(server, bench.student, bench.resultsId);
		await stored(student);
		type(student, 'In time. ');
		await stored(student);
		await database().execute(sql`update documents set frozen_at = now() where id = ${bench.resultsId}`);
		type(student, 'After closing.');
		await until('read-only', () => student.state === 'read-only' && student.unsent !== null);
		expect(readText(student.doc)).toBe('In time. ');
		expect(student.unsent).toMatchObject({
			here: { text: 'In time. After closing.' },
			stored: { text: 'In time. ' }
		});
		await student.dismissUnsent();
		expect(student.unsent).toBeNull();
	});

	it('reaches people on another process', async () => {
		const [a, b] = [await serve(), await serve()];
		const student = join(a, bench.student, bench.resultsId);
		const mate = join(b, bench.mate, bench.resultsId);
		await Promise.all([stored(student), stored(mate)]);
		await readings.raiseEpoch(database(), bench.resultsId, 1);
		type(student, 'Under the old epoch.');
		await until('both moved', () => student.epoch === 2 && mate.epoch === 2);
		await Promise.all([stored(student), stored(mate)]);
		await until('offered', () => student.unsent !== null);
		expect(mate.unsent).toBeNull();
		expect(readText(mate.doc)).toBe('');
	});
});

describe('two processes', () => {
	it('converge under random edits, and a reload shows the same', { timeout: 60_000 }, async () => {
		const [a, b] = [await serve(), await serve()];
		const people = [
			join(a, bench.student, bench.resultsId),
			join(b, bench.mate, bench.resultsId),
			join(b, bench.student, bench.resultsId)
		];
		await Promise.all(people.map(stored));
		let seed = 20_261_201;
		const random = (below: number) => {
			seed = (seed * 1_103_515_245 + 12_345) % 2_147_483_648;
			return Math.floor((seed / 2_147_483_648) * below);
		};
		for (let step = 0; step < 150; step += 1) {
			const shared = sectionText((people[random(people.length)] ?? people[0])?.doc ?? new Y.Doc());
			if (shared.length > 5 && random(3) === 0) shared.delete(random(shared.length - 3), 1 + random(3));
			else
				shared.insert(random(shared.length + 1), String.fromCharCode(97 + random(26)).repeat(1 + random(4)));
			if (step % 40 === 39) a.cut();
			if (step % 10 === 9) await new Promise((resolve) => setTimeout(resolve, 10));
		}
		await until('all stored', () => people.every((person) => person.state === 'stored'), 20_000);
		const texts = () => people.map((person) => readText(person.doc));
		await until('equal', () => new Set(texts()).size === 1);
		const reloaded = join(a, bench.mate, bench.resultsId);
		await stored(reloaded);
		expect(readText(reloaded.doc)).toBe(texts()[0]);
		expect(await textInLog(bench.resultsId)).toBe(texts()[0]);
	});

	it('show each other who is there', async () => {
		const [a, b] = [await serve(), await serve()];
		const student = join(a, bench.student, bench.resultsId);
		await stored(student);
		student.awareness?.setLocalStateField('person', { id: bench.student.id });
		const mate = join(b, bench.mate, bench.resultsId);
		const seen = () => [...(mate.awareness?.getStates().values() ?? [])].map((state) => state['person']?.id);
		await until('seen', () => seen().includes(bench.student.id));
		student.destroy();
		await until('gone', () => !seen().includes(bench.student.id));
	});

	it('hear of an edit whose doorbell got lost', async () => {
		const server = await serve({ sweepMs: { log: 150, permissions: 60_000 } });
		const student = join(server, bench.student, bench.resultsId);
		await stored(student);
		const doc = new Y.Doc();
		doc.getText('text').insert(0, 'From elsewhere.');
		await readings.appendUpdate(database(), {
			documentId: bench.resultsId,
			epoch: 1,
			userId: bench.mate.id,
			bytes: Y.encodeStateAsUpdate(doc)
		});
		await until('heard', () => readText(student.doc) === 'From elsewhere.');
	});

	it('go on without Redis when it does not answer', async () => {
		const redisUrl = 'redis://127.0.0.1:1';
		const [a, b] = [await serve({ redisUrl }), await serve({ redisUrl })];
		const student = join(a, bench.student, bench.resultsId);
		const mate = join(b, bench.mate, bench.resultsId);
		await Promise.all([stored(student), stored(mate)]);
		type(student, 'Through PostgreSQL.');
		await until('arrived', () => readText(mate.doc) === 'Through PostgreSQL.');
	});
});

describe('this device', () => {
	it('keeps what was typed without a connection, over a closed page', async () => {
		const local = memoryCopies();
		const server = await serve();
		const first = join(server, bench.student, bench.resultsId, local);
		await stored(first);
		const port = Number(new URL(server.url).port);
		servers.splice(servers.indexOf(server), 1);
		await server.close();
		await until('offline', () => first.state === 'offline');
		type(first, 'In the cellar.');
		first.destroy();
		const again = await serve({ port });
		const second = join(again, bench.student, bench.resultsId, local);
		await until('stored', () => second.state === 'stored' && readText(second.doc) === 'In the cellar.');
		expect(await textInLog(bench.resultsId)).toBe('In the cellar.');
	});

	it('offers what an ended epoch left behind, even after the page was closed', async () => {
		const local = memoryCopies();
		const server = await serve();
		const first = join(server, bench.student, bench.resultsId, local);
		await stored(first);
		const port = Number(new URL(server.url).port);
		servers.splice(servers.indexOf(server), 1);
		await server.close();
		await until('offline', () => first.state === 'offline');
		type(first, 'Nobody took this.');
		first.destroy();
		await readings.raiseEpoch(database(), bench.resultsId, 1);
		const again = await serve({ port });
		const second = openClient(again, {
			person: bench.student.id,
			documentId: bench.resultsId,
			epoch: 2,
			local
		});
		clients.push(second);
		await until('offered', () => second.unsent !== null);
		expect(second.unsent).toMatchObject({ here: { text: 'Nobody took this.' }, stored: { text: '' } });
		expect(readText(second.doc)).toBe('');
		await second.dismissUnsent();
		expect(await local.names('')).toEqual([`meniscus:${bench.student.id}:${bench.resultsId}:2`]);
	});
});

describe('a database that may lose what it confirmed', () => {
	it('is not served from', async () => {
		const url = new URL(fresh.url);
		url.searchParams.set('synchronous_commit', 'off');
		const lax = connect(url.href, 1);
		const opening = openLive({
			connection: lax,
			databaseUrl: url.href,
			origin,
			personOf: async () => null
		});
		await expect(opening).rejects.toThrow(UnfitForLiveError);
		await lax.close();
	});
});

/** What the browser's storage does, in memory. */
function memoryCopies(): LocalCopies {
	const kept = new Map<string, Uint8Array[]>();
	return {
		async names(prefix) {
			return [...kept.keys()].filter((name) => name.startsWith(prefix));
		},
		async open(name, doc) {
			const updates = kept.get(name) ?? [];
			kept.set(name, updates);
			const mine = Symbol(name);
			for (const update of updates) Y.applyUpdate(doc, update, mine);
			const keep = (update: Uint8Array, by: unknown) => {
				if (by !== mine) updates.push(update);
			};
			doc.on('update', keep);
			return {
				origin: mine,
				loaded: Promise.resolve(),
				async close() {
					doc.off('update', keep);
				},
				async remove() {
					doc.off('update', keep);
					kept.delete(name);
				}
			};
		}
	};
}
