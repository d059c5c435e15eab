import { eq, sql } from 'drizzle-orm';
import * as Y from 'yjs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { setCell } from '../../src/lib/collab';
import { Refusal, type RefusalKind } from '../../src/lib/server/errors';
import { closeDatabase, database, requestDigest, schema } from '../../src/lib/server/db';
import { letters } from '../../src/lib/server/mail';
import * as courses from '../../src/lib/server/courses';
import * as readings from '../../src/lib/server/readings';
import * as reports from '../../src/lib/server/reports';
import { act, addToTeam, join, makeCourse, makePerson, type MadeCourse } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';
import { shownOf, tenReadings, writeReport, writtenSections, type WrittenReport } from './written-report';

let fresh: FreshDatabase;
beforeAll(async () => {
	fresh = await freshDatabase();
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

async function refusal(promise: Promise<unknown>): Promise<Refusal> {
	const thrown: unknown = await promise.then(
		() => new Error('nothing was refused'),
		(problem: unknown) => problem
	);
	if (thrown instanceof Refusal) return thrown;
	throw thrown;
}
const refused = async (promise: Promise<unknown>): Promise<RefusalKind> => (await refusal(promise)).kind;

const input = ({ report, results, engine }: WrittenReport) => ({ report: report.id, results, engine });
const snapshotsOf = async (report: string) =>
	(await database().select().from(schema.snapshots).where(eq(schema.snapshots.reportId, report))).sort(
		(a, b) => a.attempt - b.attempt
	);
const past = (days: number) =>
	new Date(Date.now() - days * 86_400_000).toISOString().slice(0, 19).replace('T', ' ');
const future = (days: number) => past(-days);

describe('opening a report', () => {
	it('makes one report with its documents, once, with an alias that says nothing', async () => {
		const course = await makeCourse();
		const [first, second] = await Promise.all([
			reports.openReport(course.student, course.workId),
			reports.openReport(course.student, course.workId)
		]);
		expect(second.id).toBe(first.id);
		expect(first.alias).toMatch(/^[a-z]+-[0-9a-z]{8}$/);
		expect(
			first.sections.map(({ position, key, owner, write }) => ({ position, key, owner, write }))
		).toEqual([
			{ position: 1, key: 'abstract', owner: 'author', write: true },
			{ position: 2, key: 'introduction', owner: 'author', write: true },
			{ position: 3, key: 'method', owner: 'team', write: true },
			{ position: 4, key: 'results', owner: 'team', write: true },
			{ position: 5, key: 'discussion', owner: 'author', write: true }
		]);
		const mates = await reports.openReport(course.mate, course.workId);
		expect(mates.id).not.toBe(first.id);
		const documents = (report: typeof first, owner: string) =>
			report.sections.filter((section) => section.owner === owner).map((section) => section.document);
		expect(documents(mates, 'team')).toEqual(documents(first, 'team'));
		expect(documents(mates, 'author')).not.toEqual(documents(first, 'author'));
	});

	it('is for the team alone', async () => {
		const course = await makeCourse();
		expect(await refused(reports.openReport(course.stranger, course.workId))).toBe('not-found');
		expect(await refused(reports.openReport(course.otherStudent, course.workId))).toBe('not-found');
		expect(await refused(reports.openReport(course.grader, course.workId))).toBe('forbidden');
		expect(await refused(reports.openReport(course.instructor, course.workId))).toBe('forbidden');
		const { id } = await reports.openReport(course.student, course.workId);
		expect(await refused(reports.showReport(course.mate, id))).toBe('not-found');
		expect(await refused(reports.showReport(course.grader, id))).toBe('not-found');
		expect((await reports.showReport(course.instructor, id)).own).toBe(false);
	});

	it('closes the documents when hand-in closes, and opens them again for an extension', async () => {
		const course = await makeCourse({ dueLocal: past(4), closesLocal: past(2) });
		const closed = await reports.openReport(course.student, course.workId);
		expect(closed.sections.map(({ write, closed: why }) => ({ write, why }))).toEqual(
			Array.from({ length: 5 }, () => ({ write: false, why: 'frozen' }))
		);
		await courses.grantExtension(act(course.instructor), {
			assignment: course.assignmentId,
			userId: course.student.id,
			dueLocal: future(1).replace(' ', 'T').slice(0, 16),
			closesLocal: future(2).replace(' ', 'T').slice(0, 16),
			reason: 'Absent with a doctor’s note'
		});
		const again = await reports.openReport(course.student, course.workId);
		expect(again.due.extended).toBe(true);
		expect(again.sections.every((section) => section.write)).toBe(true);
		// The shared sections stay open for the member with more time; the others' own ones do not.
		const mates = await reports.openReport(course.mate, course.workId);
		expect(mates.sections.map(({ owner, write }) => `${owner} ${write}`)).toEqual([
			'author false',
			'author false',
			'team true',
			'team true',
			'author false'
		]);
	});
});

describe('handing in', () => {
	it('stores text, readings and results under one hash, and mails a receipt', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		expect(Object.keys(written.results)).toContain('H_vap');
		const answer = await reports.handIn(act(course.student), input(written));
		expect(answer.attempt).toMatchObject({
			attempt: 1,
			counts: true,
			lateness: { late: false, deduction: 0 }
		});
		expect(answer.receiptTo).toBe(course.student.email);

		const snapshot = await reports.readSnapshot(database(), answer.attempt.id);
		expect(snapshot.sha256).toBe(answer.attempt.sha256);
		expect(snapshot.sections.map(({ key, text }) => [key, text])).toEqual(Object.entries(writtenSections));
		expect(snapshot.readings).toEqual(tenReadings);
		expect(snapshot.evaluation.quantities['H_vap']?.display.text).toBe(written.results['H_vap']?.text);

		const [mail] = await database()
			.select()
			.from(schema.outbox)
			.where(eq(schema.outbox.subject, `snapshot:${answer.attempt.id}`));
		const { subject, text } = letters.receipt(mail?.payload as never);
		expect(mail?.recipient).toBe(course.student.email);
		expect(subject).toBe('Handed in: Enthalpy of vaporization of water');
		expect(text).toContain(answer.attempt.sha256);
		expect(text).toContain('On time.');
		expect(text).toContain('Atlantic');
		expect(text).toContain(`/c/${course.slug}/w/${course.workId}/hand-in`);

		const [audited] = await database()
			.select()
			.from(schema.audit)
			.where(
				sql`${schema.audit.action} = 'report.handIn' and ${schema.audit.subjectId} = ${written.report.id}`
			);
		expect(audited?.detail).toMatchObject({ attempt: 1, sha256: answer.attempt.sha256 });
	});

	it('is for the author alone', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		expect(await refused(reports.handIn(act(course.mate), input(written)))).toBe('not-found');
		expect(await refused(reports.handIn(act(course.stranger), input(written)))).toBe('not-found');
		expect(await refused(reports.handIn(act(course.grader), input(written)))).toBe('not-found');
		expect(await refused(reports.handIn(act(course.instructor), input(written)))).toBe('forbidden');
		expect(await snapshotsOf(written.report.id)).toEqual([]);
	});

	it('counts the newest of several attempts, and shares the parts that did not change', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId, { abstract: 'First.' });
		const first = await reports.handIn(act(course.student), input(written));
		const section = written.report.sections.find(({ key }) => key === 'results');
		if (!section) throw new Error('no results section');
		const doc = new Y.Doc();
		doc.getText('text').insert(0, 'Added later.');
		await readings.appendUpdate(database(), {
			documentId: section.document,
			epoch: section.epoch,
			userId: course.mate.id,
			bytes: Y.encodeStateAsUpdate(doc)
		});
		const second = await reports.handIn(act(course.student), input(written));
		expect(second.attempt).toMatchObject({ attempt: 2, counts: true });
		expect(second.attempt.sha256).not.toBe(first.attempt.sha256);
		const shown = await reports.openReport(course.student, course.workId);
		expect(shown.attempts.map(({ attempt, counts }) => ({ attempt, counts }))).toEqual([
			{ attempt: 2, counts: true },
			{ attempt: 1, counts: false }
		]);
		const texts = async (id: string) =>
			(await reports.readSnapshot(database(), id)).sections.map(({ text }) => text);
		expect(await texts(first.attempt.id)).toEqual(['First.', '', '', '', '']);
		expect(await texts(second.attempt.id)).toEqual(['First.', '', '', 'Added later.', '']);
		const parts = await database().execute<{ key: string; parts: number }>(
			sql`select key, count(distinct part)::int as parts from snapshot_sections
				where snapshot_id in (${first.attempt.id}, ${second.attempt.id}) group by key order by key`
		);
		expect(parts.filter((row) => row.parts > 1).map((row) => row.key)).toEqual(['results']);
	});

	it('is done once for one key, and gives the first answer again', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		const repeatable = {
			userId: course.student.id,
			key: 'k1',
			requestSha256: requestDigest('POST', '/x', JSON.stringify(input(written)))
		};
		const [one, two] = await Promise.all([
			reports.handIn(act(course.student, { repeatable }), input(written)),
			reports.handIn(act(course.student, { repeatable }), input(written))
		]);
		expect(two).toEqual(one);
		expect(await snapshotsOf(written.report.id)).toHaveLength(1);
		expect(await reports.handIn(act(course.student, { repeatable }), input(written))).toEqual(one);
	});

	it('numbers two devices at once one after the other', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		const answers = await Promise.all(
			Array.from({ length: 4 }, () => reports.handIn(act(course.student), input(written)))
		);
		expect(answers.map(({ attempt }) => attempt.attempt).sort()).toEqual([1, 2, 3, 4]);
		const rows = await snapshotsOf(written.report.id);
		const { countedSnapshotId } = (await reports.reportById(database(), written.report.id)) ?? {};
		expect(countedSnapshotId).toBe(rows[3]?.id);
	});

	it('takes all of an edit or nothing of it while somebody types', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId, { abstract: 'x' });
		const documents = written.report.sections.filter(({ owner }) => owner === 'team');
		const typing = (async () => {
			for (let n = 0; n < 25; n += 1) {
				for (const { document, epoch } of documents) {
					const doc = new Y.Doc();
					doc.getText('text').insert(0, '.');
					const bytes = Y.encodeStateAsUpdate(doc);
					await readings.appendUpdate(database(), {
						documentId: document,
						epoch,
						userId: course.mate.id,
						bytes
					});
				}
			}
		})();
		const lengths: number[][] = [];
		for (let n = 0; n < 5; n += 1) {
			const { attempt } = await reports.handIn(act(course.student), input(written));
			const { sections } = await reports.readSnapshot(database(), attempt.id);
			lengths.push(sections.filter(({ owner }) => owner === 'team').map(({ text }) => text.length));
		}
		await typing;
		// Every dot goes to the first document before the second: no snapshot may hold more of the second.
		for (const [first = 0, second = 0] of lengths) expect([0, 1]).toContain(first - second);
	});

	it('refuses an empty report', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId, { abstract: ' \n' });
		expect(await refused(reports.handIn(act(course.student), input(written)))).toBe('unprocessable');
	});
});

describe('results shown and computed', () => {
	it('refuses a difference of one bit, with both sides', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		const { H_vap: enthalpy, ...others } = written.results;
		if (!enthalpy || enthalpy.value === null) throw new Error('no enthalpy');
		const nudged = { ...enthalpy, value: enthalpy.value * (1 + 2 ** -52) };
		const problem = await refusal(
			reports.handIn(act(course.student), { ...input(written), results: { ...others, H_vap: nudged } })
		);
		expect(problem.kind).toBe('conflict');
		expect(problem.detail.extra).toEqual({
			differences: [{ name: 'H_vap', shown: nudged, computed: enthalpy }]
		});
		expect(await snapshotsOf(written.report.id)).toEqual([]);
	});

	it('refuses values of readings that have changed since, and takes the new ones', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		const { doc } = await readings.storedDocument(database(), written.report.readings.document);
		const before = Y.encodeStateVector(doc);
		setCell(doc, 'readings', 'row-3', 't', '90.10');
		await readings.appendUpdate(database(), {
			documentId: written.report.readings.document,
			epoch: 1,
			userId: course.mate.id,
			bytes: Y.encodeStateAsUpdate(doc, before)
		});
		const problem = await refusal(reports.handIn(act(course.student), input(written)));
		expect(problem.kind).toBe('conflict');
		const { readings: now, worksheet } = await reports.openSheet(course.student, course.workId);
		const answer = await reports.handIn(act(course.student), {
			report: written.report.id,
			...shownOf(worksheet, now)
		});
		expect(answer.attempt.attempt).toBe(1);
	});

	it('refuses values that are missing or too many', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		const { H_vap: _left, ...others } = written.results;
		expect(await refused(reports.handIn(act(course.student), { ...input(written), results: others }))).toBe(
			'conflict'
		);
		const extra = {
			...written.results,
			made_up: { value: 1, unit: '1', standardUncertainty: null, text: '1' }
		};
		expect(await refused(reports.handIn(act(course.student), { ...input(written), results: extra }))).toBe(
			'conflict'
		);
	});
});

describe('due and closed', () => {
	const handInAt = async (
		dates: Parameters<typeof makeCourse>[0],
		before?: (course: MadeCourse) => Promise<unknown>
	) => {
		const course = await makeCourse(dates);
		await before?.(course);
		const written = await writeReport(course.student, course.workId);
		return reports.handIn(act(course.student), input(written));
	};

	it('is late by the course’s rule', async () => {
		const due = past(1).slice(0, 11) + '12:00:00';
		const { attempt } = await handInAt({
			zone: 'UTC',
			dueLocal: due,
			closesLocal: future(3),
			lateRule: { graceMinutes: 10, steps: [{ upToHours: 72, percent: 5 }], refuseAfterHours: null }
		});
		expect(attempt.lateness).toMatchObject({ late: true, deduction: 0.05 });
		expect(attempt.lateness.sentence).toMatch(/^Late by .*: 5\u00a0% off by this course's rule\.$/);
		expect(attempt.dueAt).toBe(`${due.replace(' ', 'T')}.000Z`);
	});

	it('is not taken after closing, nor after what the rule takes', async () => {
		const closed = await refusal(handInAt({ dueLocal: past(4), closesLocal: past(1) }));
		expect(closed.kind).toBe('too-late');
		expect(closed.message).toMatch(
			/^Hand-in closed \d+ \p{L}+ \d{4}, \d\d:\d\d\. Ask your instructor about more time\.$/u
		);
		const rule = { graceMinutes: 0, steps: [{ upToHours: 1, percent: 10 }], refuseAfterHours: 2 };
		expect(await refused(handInAt({ dueLocal: past(2), closesLocal: future(1), lateRule: rule }))).toBe(
			'too-late'
		);
	});

	it('gives an extension of the person or of the team its own due time', async () => {
		const dates = { dueLocal: past(4), closesLocal: past(3) };
		const more = {
			dueLocal: future(1).replace(' ', 'T').slice(0, 16),
			closesLocal: future(2).replace(' ', 'T').slice(0, 16),
			reason: 'The thermometer broke'
		};
		for (const whose of ['userId', 'teamId'] as const) {
			const { attempt } = await handInAt({ ...dates, zone: 'UTC' }, (course) =>
				courses.grantExtension(act(course.instructor), {
					assignment: course.assignmentId,
					[whose]: whose === 'userId' ? course.student.id : course.teamId,
					...more
				})
			);
			expect(attempt.lateness.late).toBe(false);
			expect(attempt.dueAt).toBe(`${more.dueLocal}:00.000Z`);
		}
	});

	it('rules due times on the course’s clocks, also when they change', async () => {
		const rule = { graceMinutes: 0, steps: [{ upToHours: 1, percent: 50 }], refuseAfterHours: null };
		const dueAt = async (zone: string, dueLocal: string) =>
			(await handInAt({ zone, dueLocal, closesLocal: '2099-01-01 00:00', lateRule: rule })).attempt.dueAt;
		// Halifax: UTC-4 in winter, UTC-3 in summer; clocks went forward on 8 March 2026 at 02:00 and back on 1 November at 02:00.
		expect(await dueAt('America/Halifax', '2026-03-07 17:00')).toBe('2026-03-07T21:00:00.000Z');
		expect(await dueAt('America/Halifax', '2026-03-08 17:00')).toBe('2026-03-08T20:00:00.000Z');
		expect(await dueAt('America/Halifax', '2026-03-08 02:30')).toBe('2026-03-08T06:30:00.000Z');
		expect(await dueAt('America/Halifax', '2025-11-02 01:30')).toBe('2025-11-02T05:30:00.000Z');
		expect(await dueAt('Asia/Kolkata', '2026-03-08 17:00')).toBe('2026-03-08T11:30:00.000Z');
	});
});

describe('state of a report', () => {
	it('is derived, and tells the author nothing of the marking before return', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		const state = async () =>
			(await reports.statesOf(database(), [written.report.id])).get(written.report.id);
		const toAuthor = async () => (await reports.openReport(course.student, course.workId)).state;
		expect(await state()).toBe('draft');
		const { attempt } = await reports.handIn(act(course.student), input(written));
		expect(await state()).toBe('handed in');

		const [assignment] = await database()
			.select()
			.from(schema.assignments)
			.where(eq(schema.assignments.id, course.assignmentId));
		if (!assignment) throw new Error('no assignment');
		const markingId = crypto.randomUUID();
		const begun = { id: markingId, snapshotId: attempt.id, rubricVersionId: assignment.rubricVersionId };
		await database()
			.insert(schema.markings)
			.values({ ...begun, graderId: course.grader.id });
		expect(await state()).toBe('in marking');
		expect(await toAuthor()).toBe('handed in');
		await database()
			.update(schema.markings)
			.set({ finishedAt: new Date() })
			.where(eq(schema.markings.id, markingId));
		expect(await state()).toBe('marked');
		expect(await toAuthor()).toBe('handed in');

		const release = { reportId: written.report.id, byId: course.instructor.id };
		await database()
			.insert(schema.releases)
			.values({ ...release, n: 1, action: 'return' });
		expect(await state()).toBe('returned');
		expect(await toAuthor()).toBe('returned');
		expect(await refused(reports.handIn(act(course.student), input(written)))).toBe('conflict');

		const [criterion] = await database()
			.select()
			.from(schema.criteria)
			.where(eq(schema.criteria.rubricVersionId, assignment.rubricVersionId));
		const appeal = {
			reportId: written.report.id,
			criterionId: criterion?.id ?? '',
			body: 'Please look again.',
			byId: course.student.id
		};
		await database()
			.insert(schema.appeals)
			.values({ ...appeal, n: 1, action: 'ask' });
		expect(await state()).toBe('under appeal');
		await database()
			.insert(schema.appeals)
			.values({ ...appeal, n: 2, action: 'uphold', byId: course.instructor.id });
		expect(await state()).toBe('returned');
		await database()
			.insert(schema.releases)
			.values({ ...release, n: 2, action: 'withdraw' });
		expect(await state()).toBe('marked');
	});

	it('falls back to handed in with a newer attempt', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.student, course.workId);
		const { attempt } = await reports.handIn(act(course.student), input(written));
		const [assignment] = await database()
			.select()
			.from(schema.assignments)
			.where(eq(schema.assignments.id, course.assignmentId));
		await database()
			.insert(schema.markings)
			.values({
				id: crypto.randomUUID(),
				snapshotId: attempt.id,
				rubricVersionId: assignment?.rubricVersionId ?? '',
				graderId: course.grader.id
			});
		await reports.handIn(act(course.student), input(written));
		expect((await reports.statesOf(database(), [written.report.id])).get(written.report.id)).toBe(
			'handed in'
		);
	});
});

describe('a team that changes', () => {
	it('leaves a report with its author and lets the author hand it in', async () => {
		const course = await makeCourse();
		const written = await writeReport(course.mate, course.workId);
		await database()
			.update(schema.teamMembers)
			.set({ during: sql`tstzrange(lower(during), now())` as never })
			.where(eq(schema.teamMembers.userId, course.mate.id));
		const newcomer = await makePerson('Lin Sato');
		await join(course.id, newcomer, 'student', course.labSectionId);
		await addToTeam(course.id, course.teamId, newcomer);
		const left = await reports.openReport(course.mate, course.workId);
		expect(left.id).toBe(written.report.id);
		expect(left.sections.map(({ owner, write }) => `${owner} ${write}`)).toEqual([
			'author true',
			'author true',
			'team false',
			'team false',
			'author true'
		]);
		expect((await reports.handIn(act(course.mate), input(written))).attempt.attempt).toBe(1);
		expect((await reports.openReport(newcomer, course.workId)).id).not.toBe(written.report.id);
	});
});
