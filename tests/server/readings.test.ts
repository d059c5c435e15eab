import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import * as Y from 'yjs';
import { readReadings, seedReadings, writeReadings } from '../../src/lib/collab';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import * as readings from '../../src/lib/server/readings';
import { evaluate, workingsFor, type Readings } from '../../src/lib/worksheets';
import { makeCourse, refusalOf, type MadeCourse } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';

/** Ten equal steps from 400 to 760 torr and the boiling temperatures of water there, computed from published saturation pressures. */
const pairs: [string, string][] = [
	['82.93', '400.0'],
	['85.35', '440.0'],
	['87.59', '480.0'],
	['89.68', '520.0'],
	['91.64', '560.0'],
	['93.48', '600.0'],
	['95.23', '640.0'],
	['96.89', '680.0'],
	['98.47', '720.0'],
	['99.97', '760.0']
];
const typed: Readings = {
	parameters: { p_b: '756.2' },
	tables: {
		readings: pairs.map(([t, p], index) => ({ id: `row${index + 1}`, cells: { t, p }, status: 'used' }))
	}
};

let fresh: FreshDatabase;
let course: MadeCourse;

beforeAll(async () => {
	fresh = await freshDatabase();
	course = await makeCourse();
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

const refusedAs = async (promise: Promise<unknown>) => (await refusalOf(promise)).kind;

describe('a bench', () => {
	it('comes into being when it is first opened, once, however many open it', async () => {
		const opened = await Promise.all(
			[course.student, course.mate, course.grader].map((viewer) => readings.openBench(viewer, course.workId))
		);
		expect(new Set(opened.map(({ document }) => document.id)).size).toBe(1);
		expect(opened.map(({ document }) => document.canWrite)).toEqual([true, true, false]);
		expect(opened[0]?.readings).toEqual({ parameters: {}, tables: { readings: [] } });
		expect(opened[0]?.people.map(({ initials }) => initials)).toEqual(['IO', 'TL']);
		const written = await database()
			.select({ action: schema.audit.action, subject: schema.audit.subjectId })
			.from(schema.audit)
			.where(eq(schema.audit.courseId, course.id));
		expect(written.filter(({ action }) => action === 'bench.open')).toEqual([
			{ action: 'bench.open', subject: opened[0]?.document.id }
		]);
	});

	it('is not there for others', async () => {
		for (const viewer of [course.stranger, course.otherStudent, course.otherGrader]) {
			expect(await refusedAs(readings.openBench(viewer, course.workId))).toBe('not-found');
			expect(await refusedAs(readings.evaluation(viewer, course.workId))).toBe('not-found');
			expect(await refusedAs(readings.storedReadings(viewer, course.workId))).toBe('not-found');
		}
	});
});

describe('what the server makes of stored readings', () => {
	it('is what the browser makes of them while they are typed, to the last bit', async () => {
		const { document, worksheet } = await readings.openBench(course.student, course.workId);
		const seeded = await database().transaction((tx) =>
			readings.seedDocument(tx, document.id, seedReadings(typed), course.student.id)
		);
		expect(seeded).toBe(true);
		const doc = new Y.Doc();
		writeReadings(doc, typed);
		const inBrowser = evaluate(worksheet, readReadings(doc, ['readings']));
		const onServer = await readings.evaluation(course.grader, course.workId);
		expect(JSON.stringify(onServer)).toBe(JSON.stringify(inBrowser));
		expect(onServer.quantities['H_vap']?.value).toBeCloseTo(41.6, 1);
		const stored = await readings.storedReadings(course.mate, course.workId);
		expect(stored.readings).toEqual(typed);
		expect(stored.seq).toBe(1);
	});

	it('gives the sample calculation of the row that is asked for', async () => {
		const { worksheet, readings: stored } = await readings.openBench(course.student, course.workId);
		const first = evaluate(worksheet, stored).workings['ln_p'];
		const third = workingsFor(worksheet, stored, { readings: 'row3' })['ln_p'];
		expect([first?.row, third?.row]).toEqual(['row1', 'row3']);
		expect(third?.title).toMatch(/row 3$/);
		expect(third?.substituted).toContain('480.0');
		expect(workingsFor(worksheet, stored, { readings: 'gone' })['ln_p']?.row).toBe('row1');
	});
});

describe('a document', () => {
	it('tells those who may see it what it is', async () => {
		const { document } = await readings.openBench(course.student, course.workId);
		expect(await readings.openDocument(course.mate, document.id)).toMatchObject({
			kind: 'readings',
			key: 'readings',
			work: course.workId,
			own: false,
			epoch: 1,
			canWrite: true
		});
		expect(await refusedAs(readings.openDocument(course.stranger, document.id))).toBe('not-found');
		expect(await refusedAs(readings.versionsOf(course.stranger, document.id, { limit: 10 }))).toBe(
			'not-found'
		);
	});

	it('lists its versions a page at a time, newest first', async () => {
		const documents = await database().transaction((tx) =>
			readings.ensureDocuments(tx, course.workId, [{ key: 'results', owner: 'team' }], null)
		);
		const id = documents.find(({ key }) => key === 'results')?.id ?? '';
		for (let seq = 1; seq <= 5; seq += 1) {
			await readings.storeVersion(database(), {
				documentId: id,
				seq,
				text: `Text ${seq}.`,
				byId: course.mate.id
			});
		}
		const first = await readings.versionsOf(course.student, id, { limit: 3 });
		expect(first.items.map(({ text, by }) => [text, by])).toEqual([
			['Text 5.', 'TL'],
			['Text 4.', 'TL'],
			['Text 3.', 'TL']
		]);
		const second = await readings.versionsOf(course.student, id, { limit: 3, after: first.next ?? '' });
		expect(second.items.map(({ seq }) => seq)).toEqual([2, 1]);
		expect(second.next).toBeNull();
	});
});
