import { sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { describe, expect, it } from 'vitest';
import type { Viewer } from '../../src/lib/server/auth';
import { database } from '../../src/lib/server/db';
import type { Refusal } from '../../src/lib/server/errors';
import * as marking from '../../src/lib/server/marking';
import { act, refusalOf } from '../factories';
import {
	anchorOn,
	handedIn,
	markingCourse,
	setLevels,
	type HandedIn,
	type MarkingCourse
} from './marking-rows';
import { ownDatabase } from './own-database';

const owner = await ownDatabase();

const begin = (viewer: Viewer, report: HandedIn) => marking.openMarking(act(viewer), { alias: report.alias });

/** Sets every criterion to its level and returns the newest state. */
const markAll = (course: MarkingCourse, viewer: Viewer, report: HandedIn, levels = [2, 1, 2]) =>
	setLevels(course, viewer, report.alias, levels);

describe('a sitting', () => {
	it('holds the reports of the grader’s own lab sections, in an order that stays', async () => {
		const course = await markingCourse();
		const own = await Promise.all(Array.from({ length: 12 }, () => handedIn(course)));
		await handedIn(course, { section: 'thursday' });
		const first = await marking.openSitting(act(course.grader), { assignment: course.assignmentId });
		const again = await marking.openSitting(act(course.grader), { assignment: course.assignmentId });
		const order = first.reports.map((report) => report.alias);
		expect([...order].sort()).toEqual(own.map((report) => report.alias).sort());
		expect(again.reports.map((report) => report.alias)).toEqual(order);
		expect(first.reports.map((report) => report.position)).toEqual(
			Array.from({ length: 12 }, (_, i) => i + 1)
		);
		const late = await handedIn(course);
		const later = await marking.openSitting(act(course.grader), { assignment: course.assignmentId });
		expect(later.reports.map((report) => report.alias)).toEqual([...order, late.alias]);
	});

	it('draws one order when two windows open it at once', async () => {
		const course = await markingCourse();
		await Promise.all(Array.from({ length: 6 }, () => handedIn(course)));
		const opened = await Promise.all(
			Array.from({ length: 6 }, () =>
				marking.openSitting(act(course.grader), { assignment: course.assignmentId })
			)
		);
		const orders = new Set(opened.map((sitting) => sitting.reports.map((report) => report.alias).join()));
		expect(orders.size).toBe(1);
		const [count] =
			await owner`select count(*)::int as n from sittings where grader_id = ${course.grader.id}`;
		expect(count?.['n']).toBe(1);
	});

	it('is not there for people who do not grade the course, nor another grader’s', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		for (const viewer of [course.stranger, report.author, course.instructor]) {
			const refusal = await refusalOf(marking.openSitting(act(viewer), { assignment: course.assignmentId }));
			expect(['not-found', 'forbidden']).toContain(refusal.kind);
		}
		const sitting = await marking.openSitting(act(course.grader), { assignment: course.assignmentId });
		expect((await refusalOf(marking.readSitting(course.colleague, sitting.id))).kind).toBe('not-found');
	});

	it('counts what is finished and names the next', async () => {
		const course = await markingCourse();
		await Promise.all([handedIn(course), handedIn(course)]);
		const sitting = await marking.openSitting(act(course.grader), { assignment: course.assignmentId });
		const [first, second] = sitting.reports;
		expect(sitting.next?.alias).toBe(first?.alias);
		const state = await markAll(course, course.grader, { alias: first?.alias ?? '' } as HandedIn);
		const done = await marking.finishMarking(act(course.grader, { revision: state.revision }), {
			marking: state.id
		});
		expect(done.next?.alias).toBe(second?.alias);
		const after = await marking.readSitting(course.grader, sitting.id);
		expect(after.finished).toBe(1);
		expect(after.reports.map((report) => report.state)).toEqual(['finished', 'unmarked']);
		// 3.25 + 2.5 + 2 of 4 + 5 + 2
		expect(after.reports[0]?.total).toEqual({ points: 775, maximum: 1100, set: 3, of: 3 });
	});
});

describe('hidden names', () => {
	it('no answer of the sitting names the author, an id of theirs, or when they handed in', async () => {
		const course = await markingCourse();
		const report = await handedIn(course, { lateMinutes: 95 });
		const answers: unknown[] = [];
		const keep = async <T>(promise: Promise<T>): Promise<T> => {
			const answer = await promise;
			answers.push(answer);
			return answer;
		};
		const { grader } = course;
		const sitting = await keep(marking.openSitting(act(grader), { assignment: course.assignmentId }));
		await keep(marking.readSitting(grader, sitting.id));
		await keep(marking.tonight(grader, course.id));
		await keep(marking.openSheet(grader, { course: course.slug, alias: report.alias }));
		const begun = await keep(begin(grader, report));
		await keep(marking.openSheet(grader, { course: course.slug, alias: report.alias }));
		await keep(marking.readMarking(grader, begun.id));
		const remark = uuidv7();
		let state = await keep(
			marking.addRemark(act(grader, { revision: begun.revision }), {
				marking: begun.id,
				remark,
				kind: 'question',
				body: 'How long?',
				anchor: anchorOn('We waited', 0)
			})
		);
		state = await keep(
			marking.reviseRemark(act(grader, { revision: state.revision }), { remark, kind: 'note', body: 'Why?' })
		);
		await keep(marking.deleteRemark(act(grader, { revision: state.revision }), { remark }));
		state = await keep(markAll(course, grader, report));
		const finished = await keep(
			marking.finishMarking(act(grader, { revision: state.revision }), { marking: state.id })
		);
		await keep(
			marking.reopenMarking(act(grader, { revision: finished.marking.revision }), { marking: state.id })
		);
		await keep(
			marking.openMarking(act(course.colleague), { alias: report.alias }).catch((thrown: unknown) => {
				const { message, detail } = thrown as Refusal;
				return { message, detail };
			})
		);
		expect(answers.length).toBe(14);
		const text = JSON.stringify(answers);
		expect(text).toContain(report.alias);
		for (const { name, email, id, initials } of [report.author, report.mate]) {
			for (const word of [...name.split(' '), email, id, `"${initials}"`]) expect(text).not.toContain(word);
		}
		for (const id of [report.report, report.snapshot, report.work, report.team])
			expect(text).not.toContain(id);
		expect(text).not.toContain(report.receivedAt.toISOString());
		expect(text).not.toContain(report.receivedAt.toISOString().slice(0, 16));
		expect(text).not.toMatch(/late by/u);
	});

	it('are shown where the assignment does not hide them', async () => {
		const course = await markingCourse({ hideNames: false });
		const report = await handedIn(course, { lateMinutes: 95 });
		const sitting = await marking.openSitting(act(course.grader), { assignment: course.assignmentId });
		expect(sitting.reports[0]).toMatchObject({ author: 'Ines Okafor', received: 'late by 95 min' });
		const sheet = await marking.openSheet(course.grader, { course: course.slug, alias: report.alias });
		expect(sheet.author).toBe('Ines Okafor');
	});
});

describe('who may mark', () => {
	it('another lab section’s grader, the author, team mates and strangers find nothing', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const state = await begin(course.grader, report);
		for (const viewer of [course.elsewhere, report.mate, course.stranger]) {
			expect((await refusalOf(begin(viewer, report))).kind).toBe('not-found');
			expect(
				(await refusalOf(marking.openSheet(viewer, { course: course.slug, alias: report.alias }))).kind
			).toBe('not-found');
			expect((await refusalOf(marking.readMarking(viewer, state.id))).kind).toBe('not-found');
			expect(
				(
					await refusalOf(
						marking.setLevel(act(viewer, { revision: 1 }), {
							marking: state.id,
							criterion: course.criteria.method,
							level: 1,
							reason: ''
						})
					)
				).kind
			).toBe('not-found');
		}
		expect((await refusalOf(begin(report.author, report))).kind).toBe('forbidden');
		expect((await refusalOf(marking.readMarking(report.author, state.id))).kind).toBe('not-found');
	});

	it('a colleague of the same lab section is told who has it and what is next', async () => {
		const course = await markingCourse();
		const [taken, free] = await Promise.all([handedIn(course), handedIn(course)]);
		await begin(course.grader, taken);
		await marking.openSitting(act(course.colleague), { assignment: course.assignmentId });
		const refusal = await refusalOf(begin(course.colleague, taken));
		const label = marking.labelOf(free.alias);
		expect(refusal.kind).toBe('conflict');
		expect(refusal.message).toBe(`Amal is marking this one. Next: ${label}.`);
		expect(refusal.detail.extra).toEqual({ next: { alias: free.alias, label } });
		const sheet = await marking.openSheet(course.colleague, { course: course.slug, alias: taken.alias });
		expect(sheet).toMatchObject({ marking: null, takenBy: 'Amal' });
	});

	it('one first marking of a hand-in, however many begin it at once', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const tries = await Promise.allSettled(
			Array.from({ length: 8 }, (_, index) =>
				begin(index % 2 === 0 ? course.grader : course.colleague, report)
			)
		);
		const ids = tries.flatMap((result) => (result.status === 'fulfilled' ? [result.value.id] : []));
		expect(new Set(ids).size).toBe(1);
		expect(ids.length).toBe(4);
		for (const result of tries)
			if (result.status === 'rejected') expect((result.reason as Refusal).kind).toBe('conflict');
		const rows = await owner`select kind from markings where snapshot_id = ${report.snapshot}`;
		expect(rows.map((row) => row['kind'])).toEqual(['first']);
	});
});

describe('levels', () => {
	it('keep every earlier one, and the newest holds', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		let state = await begin(course.grader, report);
		for (const level of [1, 3, null, 2]) {
			state = await marking.setLevel(act(course.grader, { revision: state.revision }), {
				marking: state.id,
				criterion: course.criteria.method,
				level,
				reason: ''
			});
		}
		expect(state.levels).toMatchObject([{ criterion: course.criteria.method, level: 2, points: 325 }]);
		expect(state.total).toEqual({ points: 325, maximum: 1100, set: 1, of: 3 });
		const rows =
			await owner`select n, level, points_hundredths from score_events where marking_id = ${state.id} order by n`;
		expect(rows.map((row) => [row['n'], row['level'], row['points_hundredths']])).toEqual([
			[1, 1, 150],
			[2, 3, 400],
			[3, null, null],
			[4, 2, 325]
		]);
		await expect(owner`update score_events set level = 0 where marking_id = ${state.id}`).rejects.toThrow(
			/append-only/u
		);
		await expect(owner`delete from score_events where marking_id = ${state.id}`).rejects.toThrow(
			/append-only/u
		);
	});

	it('are refused on a stale revision, and nothing is written', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const state = await begin(course.grader, report);
		const set = (level: number, revision?: number) =>
			marking.setLevel(act(course.grader, revision === undefined ? {} : { revision }), {
				marking: state.id,
				criterion: course.criteria.method,
				level,
				reason: ''
			});
		const newer = await set(1, state.revision);
		expect(newer.revision).toBe(state.revision + 1);
		expect((await refusalOf(set(3, state.revision))).kind).toBe('stale');
		expect((await refusalOf(set(3))).kind).toBe('unprocessable');
		// The unanswered write repeated: it holds already.
		expect((await set(1, state.revision)).revision).toBe(newer.revision);
		const [count] = await owner`select count(*)::int as n from score_events where marking_id = ${state.id}`;
		expect(count?.['n']).toBe(1);
	});

	it('of two writes that saw the same revision one is refused', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const state = await begin(course.grader, report);
		const tries = await Promise.allSettled(
			[1, 2, 3].map((level) =>
				marking.setLevel(act(course.grader, { revision: state.revision }), {
					marking: state.id,
					criterion: course.criteria.method,
					level,
					reason: ''
				})
			)
		);
		expect(tries.filter((result) => result.status === 'fulfilled')).toHaveLength(1);
		for (const result of tries)
			if (result.status === 'rejected') expect((result.reason as Refusal).kind).toBe('stale');
	});

	it('belong to the marking’s own rubric', async () => {
		const course = await markingCourse();
		const other = await markingCourse();
		const state = await begin(course.grader, await handedIn(course));
		const set = (criterion: string, level: number) =>
			marking.setLevel(act(course.grader, { revision: state.revision }), {
				marking: state.id,
				criterion,
				level,
				reason: ''
			});
		expect((await refusalOf(set(other.criteria.method, 1))).kind).toBe('not-found');
		expect((await refusalOf(set(course.criteria.uncertainty, 3))).kind).toBe('unprocessable');
	});
});

describe('remarks', () => {
	it('may be sent again, are revised and deleted without losing anything, and come back', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const begun = await begin(course.grader, report);
		const remark = uuidv7();
		const add = (revision: number) =>
			marking.addRemark(act(course.grader, { revision }), {
				marking: begun.id,
				remark,
				kind: 'to correct',
				body: 'The guide asks for two.',
				anchor: anchorOn('waited one minute', 3)
			});
		const added = await add(begun.revision);
		expect((await add(begun.revision)).revision).toBe(added.revision);
		expect(added.remarks).toHaveLength(1);
		expect(added.remarks[0]).toMatchObject({
			id: remark,
			kind: 'to correct',
			body: 'The guide asks for two.',
			anchor: { ...anchorOn('waited one minute', 3), attached: true }
		});
		const revised = await marking.reviseRemark(act(course.grader, { revision: added.revision }), {
			remark,
			kind: 'question',
			body: 'Why one?'
		});
		const stale = await refusalOf(
			marking.reviseRemark(act(course.grader, { revision: added.revision }), {
				remark,
				kind: 'note',
				body: 'Other words.'
			})
		);
		expect(stale.kind).toBe('stale');
		const deleted = await marking.deleteRemark(act(course.grader, { revision: revised.revision }), {
			remark
		});
		expect(deleted.remarks).toEqual([]);
		const back = await marking.reviseRemark(act(course.grader, { revision: deleted.revision }), {
			remark,
			kind: 'question',
			body: 'Why one?'
		});
		expect(back.remarks).toMatchObject([{ id: remark, kind: 'question', body: 'Why one?' }]);
		const rows =
			await owner`select n, body, deleted from remark_revisions where remark_id = ${remark} order by n`;
		expect(rows.map((row) => [row['n'], row['body'], row['deleted']])).toEqual([
			[1, 'The guide asks for two.', false],
			[2, 'Why one?', false],
			[3, 'Why one?', true],
			[4, 'Why one?', false]
		]);
		await expect(owner`update remark_revisions set body = 'x' where remark_id = ${remark}`).rejects.toThrow(
			/append-only/u
		);
	});

	it('are refused for a section that was not handed in, and under another marking’s id', async () => {
		const course = await markingCourse();
		const [one, two] = [
			await begin(course.grader, await handedIn(course)),
			await begin(course.grader, await handedIn(course))
		];
		const remark = uuidv7();
		const words = { remark, kind: 'note' as const, body: 'Here.' };
		const lost = await refusalOf(
			marking.addRemark(act(course.grader, { revision: one.revision }), {
				...words,
				marking: one.id,
				anchor: { ...anchorOn('We', 0), section: 9 }
			})
		);
		expect(lost.kind).toBe('unprocessable');
		await marking.addRemark(act(course.grader, { revision: one.revision }), {
			...words,
			marking: one.id,
			anchor: anchorOn('We', 0)
		});
		const foreign = await refusalOf(
			marking.addRemark(act(course.grader, { revision: two.revision }), {
				...words,
				marking: two.id,
				anchor: anchorOn('We', 0)
			})
		);
		expect(foreign.kind).toBe('conflict');
	});

	it('of two markings that send one id at once, one gets it and the other is told', async () => {
		const course = await markingCourse();
		for (let round = 0; round < 5; round++) {
			const [one, two] = [
				await begin(course.grader, await handedIn(course)),
				await begin(course.grader, await handedIn(course))
			];
			const remark = uuidv7();
			const outcomes = await Promise.allSettled(
				[one, two].map((state) =>
					marking.addRemark(act(course.grader, { revision: state.revision }), {
						remark,
						kind: 'note',
						body: 'Here.',
						marking: state.id,
						anchor: anchorOn('We', 0)
					})
				)
			);
			expect(outcomes.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
			const refused = outcomes.find((outcome) => outcome.status === 'rejected');
			expect((refused?.reason as Refusal).kind).toBe('conflict');
		}
	});

	it('are kept once for each wording, counted, and belong to who kept them', async () => {
		const course = await markingCourse();
		const keep = (viewer: Viewer, kind: 'note' | 'question') =>
			marking.keepRemark(act(viewer), { courseId: course.id, kind, body: 'Name the source.' });
		const kept = await keep(course.grader, 'note');
		expect((await keep(course.grader, 'question')).id).toBe(kept.id);
		expect((await keep(course.colleague, 'note')).id).not.toBe(kept.id);
		await marking.useKeptRemark(act(course.grader), { kept: kept.id });
		expect(await marking.listKeptRemarks(course.grader, course.id)).toEqual([
			{ id: kept.id, kind: 'question', body: 'Name the source.', uses: 1 }
		]);
		const recorded = await database().execute<{ action: string }>(
			sql`select action from audit where subject_id = ${kept.id} order by id`
		);
		expect(recorded.map(({ action }) => action)).toEqual(['remark.keep', 'remark.keep', 'remark.use']);
		expect((await refusalOf(marking.useKeptRemark(act(course.colleague), { kept: kept.id }))).kind).toBe(
			'not-found'
		);
		await marking.dropKeptRemark(act(course.grader), { kept: kept.id });
		expect(await marking.listKeptRemarks(course.grader, course.id)).toEqual([]);
	});
});

describe('finishing', () => {
	it('wants a level for every criterion and closes the marking until it is reopened', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const begun = await begin(course.grader, report);
		const unset = await refusalOf(
			marking.finishMarking(act(course.grader, { revision: begun.revision }), { marking: begun.id })
		);
		expect(unset.kind).toBe('unprocessable');
		expect(unset.message).toContain('Method, Uncertainty, Writing');
		const full = await markAll(course, course.grader, report);
		const { marking: finished } = await marking.finishMarking(
			act(course.grader, { revision: full.revision }),
			{ marking: full.id }
		);
		expect(finished.finishedAt).not.toBeNull();
		const level = { marking: full.id, criterion: course.criteria.method, level: 0, reason: '' };
		const closed = await refusalOf(
			marking.setLevel(act(course.grader, { revision: finished.revision }), level)
		);
		expect(closed.kind).toBe('conflict');
		const reopened = await marking.reopenMarking(act(course.grader, { revision: finished.revision }), {
			marking: full.id
		});
		const changed = await marking.setLevel(act(course.grader, { revision: reopened.revision }), level);
		expect(changed.total.points).toBe(0 + 250 + 200);
	});
});
