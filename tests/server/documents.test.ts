import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import * as Y from 'yjs';
import { readReadings, readText, seedSection, setParameter } from '../../src/lib/collab';
import { v7 as uuidv7 } from 'uuid';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import * as readings from '../../src/lib/server/readings';
import { freshDatabase, type FreshDatabase } from '../harness';
import { makeBench, type Bench } from './live-course';

let fresh: FreshDatabase;
let bench: Bench;

beforeAll(async () => {
	fresh = await freshDatabase();
	bench = await makeBench();
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

/** An edit as a client makes it. */
function edit(doc: Y.Doc, change: () => void): Uint8Array {
	const before = Y.encodeStateVector(doc);
	change();
	return Y.encodeStateAsUpdate(doc, before);
}
const typed = (text: string) => {
	const doc = new Y.Doc();
	return edit(doc, () => doc.getText('text').insert(0, text));
};
const append = (documentId: string, userId: string, bytes = typed('x'), epoch = 1) =>
	readings.appendUpdate(database(), { documentId, epoch, userId, bytes });
const rowsOf = async (documentId: string) => {
	const [row] = await database().execute<{ n: number; seq: string }>(
		sql`select (select count(*)::int from document_updates where document_id = ${documentId}) as n, seq from documents where id = ${documentId}`
	);
	return { n: row?.n, seq: Number(row?.seq) };
};

describe('documents of a work', () => {
	it('are made once, one for each section and owner', async () => {
		const again = await database().transaction((tx) =>
			readings.ensureDocuments(
				tx,
				bench.workId,
				[
					{ key: 'abstract', owner: 'author' },
					{ key: 'results', owner: 'team' }
				],
				bench.student.id
			)
		);
		expect(again.map(({ kind, key, authorId }) => ({ kind, key, authorId }))).toEqual([
			{ kind: 'readings', key: 'readings', authorId: null },
			{ kind: 'section', key: 'abstract', authorId: bench.student.id },
			{ kind: 'section', key: 'results', authorId: null }
		]);
		expect(again.map((document) => document.id)).toEqual([
			bench.readingsId,
			bench.abstractId,
			bench.resultsId
		]);
	});

	it('are seeded once, by whoever comes first', async () => {
		const fresh = await makeBench();
		const seed = (text: string) =>
			database().transaction((tx) => readings.seedDocument(tx, fresh.resultsId, seedSection(text)));
		expect(await Promise.all([seed('Results.'), seed('Results.')])).toEqual(
			expect.arrayContaining([true, false])
		);
		const { doc, seq } = await readings.storedDocument(database(), fresh.resultsId);
		expect(readText(doc)).toBe('Results.');
		expect(seq).toBe(1);
	});
});

describe('an edit is appended', () => {
	it('with the next sequence of its document, for those who own it', async () => {
		const first = await append(bench.resultsId, bench.student.id);
		const second = await append(bench.resultsId, bench.mate.id);
		expect([first?.seq, second?.seq]).toEqual([1, 2]);
	});

	it.each([
		['a stranger', () => bench.stranger.id, () => bench.resultsId],
		['staff', () => bench.instructor.id, () => bench.resultsId],
		['a grader at the readings', () => bench.grader.id, () => bench.readingsId],
		["a team mate in somebody's own section", () => bench.mate.id, () => bench.abstractId]
	])('but not by %s', async (_who, user, document) => {
		const before = await rowsOf(document());
		expect(await append(document(), user())).toBeNull();
		expect(await rowsOf(document())).toEqual(before);
	});

	it('but not under another epoch', async () => {
		const before = await rowsOf(bench.resultsId);
		expect(await append(bench.resultsId, bench.student.id, typed('x'), 2)).toBeNull();
		expect(await rowsOf(bench.resultsId)).toEqual(before);
	});

	it('but not when frozen, and again when the freezing lies ahead', async () => {
		const own = await makeBench();
		const freeze = (at: string) =>
			database().execute(
				sql`update documents set frozen_at = ${at}::timestamptz where id = ${own.resultsId}`
			);
		await freeze('2020-01-01T00:00:00Z');
		expect(await append(own.resultsId, own.student.id)).toBeNull();
		expect(await readings.documentAccess(database(), own.student.id, own.resultsId)).toMatchObject({
			write: false,
			closed: 'frozen'
		});
		await freeze('2199-01-01T00:00:00Z');
		expect(await append(own.resultsId, own.student.id)).toEqual({ seq: 1 });
	});

	it('but not after the person left the team', async () => {
		const own = await makeBench();
		await database().execute(
			sql`update team_members set during = tstzrange(lower(during), now()) where user_id = ${own.mate.id}`
		);
		expect(await append(own.resultsId, own.mate.id)).toBeNull();
		expect(await append(own.resultsId, own.student.id)).toEqual({ seq: 1 });
	});

	it('by many at once without a gap or a double', async () => {
		const own = await makeBench();
		const answers = await Promise.all(
			Array.from({ length: 40 }, (_, n) =>
				append(own.resultsId, n % 2 ? own.student.id : own.mate.id, typed('a'))
			)
		);
		expect(answers.map((answer) => answer?.seq ?? 0).sort((a, b) => a - b)).toEqual(
			Array.from({ length: 40 }, (_, n) => n + 1)
		);
		expect(await rowsOf(own.resultsId)).toEqual({ n: 40, seq: 40 });
	});
});

describe('what may be seen', () => {
	it('is told without telling a stranger that it exists', async () => {
		const access = (viewer: { id: string }, id = bench.readingsId) =>
			readings.documentAccess(database(), viewer.id, id);
		expect(await access(bench.student)).toMatchObject({ epoch: 1, write: true, closed: null });
		expect(await access(bench.grader)).toMatchObject({ write: false });
		expect(await access(bench.stranger)).toBeNull();
		expect(await access(bench.grader, bench.resultsId)).toBeNull();
		expect(await access(bench.mate, bench.abstractId)).toBeNull();
	});
});

describe('freezing', () => {
	const freezesAt = async (documentId: string) => {
		const [row] = await database().execute<{ at: Date | string | null }>(
			sql`select frozen_at as at from documents where id = ${documentId}`
		);
		return row?.at ? new Date(row.at).toISOString() : null;
	};
	const closes = (assignmentId: string, local: string) =>
		database().execute(
			sql`update assignments set due_local = ${local}::timestamp, closes_local = ${local}::timestamp where id = ${assignmentId}`
		);
	const extend = (own: Bench, who: { user?: string; team?: string }, local: string) =>
		database()
			.insert(schema.extensions)
			.values({
				id: uuidv7(),
				assignmentId: own.assignmentId,
				userId: who.user ?? null,
				teamId: who.team ?? null,
				dueLocal: local,
				closesLocal: local,
				reason: 'Ill.',
				grantedBy: own.instructor.id
			});

	it("is set when documents are made, in the course's zone", async () => {
		const own = await makeBench();
		// Halifax is four hours behind in December.
		expect(await freezesAt(own.resultsId)).toBe('2199-12-12T21:00:00.000Z');
	});

	it('follows the dates, summer time included, and refuses the append at that moment', async () => {
		const own = await makeBench();
		await closes(own.assignmentId, '2026-07-01 17:00:00');
		await readings.setFreezing(database());
		expect(await freezesAt(own.resultsId)).toBe('2026-07-01T20:00:00.000Z');
		expect(await append(own.resultsId, own.student.id)).toBeNull();
		await closes(own.assignmentId, '2199-07-01 17:00:00');
		await readings.setFreezing(database());
		expect(await append(own.resultsId, own.student.id)).toEqual({ seq: 1 });
	});

	it("is an author's own for own sections, and the latest member's for the team", async () => {
		const own = await makeBench();
		await closes(own.assignmentId, '2026-07-01 17:00:00');
		await extend(own, { user: own.mate.id }, '2199-08-01 17:00:00');
		await readings.setFreezing(database());
		expect(await append(own.abstractId, own.student.id)).toBeNull();
		expect(await append(own.resultsId, own.student.id)).toEqual({ seq: 1 });
		await extend(own, { team: own.teamId }, '2199-08-02 17:00:00');
		await readings.setFreezing(database());
		expect(await append(own.abstractId, own.student.id)).toEqual({ seq: 1 });
		expect(await freezesAt(own.resultsId)).toBe('2199-08-02T20:00:00.000Z');
	});
});

describe('epochs', () => {
	it('are raised once, however many refusals there are', async () => {
		const own = await makeBench();
		const raised = await Promise.all([1, 2, 3].map(() => readings.raiseEpoch(database(), own.resultsId, 1)));
		expect(raised).toEqual([2, 2, 2]);
	});
});

describe('compaction', () => {
	it('changes nothing that is read, before, during and after further edits', async () => {
		const own = await makeBench();
		const doc = new Y.Doc();
		for (let n = 0; n < 30; n += 1) {
			const bytes = edit(doc, () => setParameter(doc, `p${n % 7}`, String(n)));
			expect(await append(own.readingsId, own.student.id, bytes)).toEqual({ seq: n + 1 });
			if (n % 11 === 10) await readings.compactDocument(database(), own.readingsId);
		}
		expect((await rowsOf(own.readingsId)).n).toBeLessThan(30);
		const stored = await readings.storedDocument(database(), own.readingsId);
		expect(stored.seq).toBe(30);
		expect(readReadings(stored.doc, [])).toEqual(readReadings(doc, []));
		// A process that had read up to 5 gets the base instead of the rows that are gone.
		const late = await readings.updatesAfter(database(), own.readingsId, 5);
		const other = new Y.Doc();
		for (const entry of late) Y.applyUpdate(other, entry.bytes);
		expect(readReadings(other, [])).toEqual(readReadings(doc, []));
	});

	it('loses no edit that comes while it works', async () => {
		const own = await makeBench();
		const doc = new Y.Doc();
		const write = async (from: number) => {
			for (let n = from; n < from + 25; n += 1) {
				await append(
					own.readingsId,
					own.student.id,
					edit(doc, () => setParameter(doc, `p${n}`, String(n)))
				);
			}
		};
		await write(0);
		await Promise.all([
			write(100),
			...[1, 2, 3].map(() => readings.compactDocument(database(), own.readingsId))
		]);
		const stored = await readings.storedDocument(database(), own.readingsId);
		expect(readReadings(stored.doc, [])).toEqual(readReadings(doc, []));
		expect(stored.seq).toBe(50);
	});
});

describe('versions', () => {
	it('are kept when the text changed, with the last writer', async () => {
		const own = await makeBench();
		await append(own.resultsId, own.mate.id, typed('First.'));
		expect(await readings.keepText(database(), own.resultsId)).toBe(true);
		expect(await readings.keepText(database(), own.resultsId)).toBe(false);
		const kept = await database().execute<{ text: string; by_id: string }>(
			sql`select text, by_id from document_versions where document_id = ${own.resultsId}`
		);
		expect([...kept]).toEqual([{ text: 'First.', by_id: own.mate.id }]);
	});
});
