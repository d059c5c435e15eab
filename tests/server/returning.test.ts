import { randomUUID } from 'node:crypto';
import { v7 as uuidv7 } from 'uuid';
import { describe, expect, it } from 'vitest';
import type { Viewer } from '../../src/lib/server/auth';
import { requestDigest } from '../../src/lib/server/db';
import type { Refusal } from '../../src/lib/server/errors';
import { letters } from '../../src/lib/server/mail';
import * as marking from '../../src/lib/server/marking';
import * as moderation from '../../src/lib/server/moderation';
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

const remarkOf = new Map<string, string>();

/** Marks with levels 2, 1, 2 (3.25 + 2.5 + 2 = 7.75 of 11), one remark, and finishes unless said. */
async function mark(course: MarkingCourse, report: HandedIn, finish = true) {
	const as = (revision: number) => act(course.grader, { revision });
	let state = await setLevels(course, course.grader, report.alias, [2, 1, 2]);
	const remark = uuidv7();
	state = await marking.addRemark(as(state.revision), {
		marking: state.id,
		remark,
		kind: 'to correct',
		body: 'The guide asks for two minutes.',
		anchor: anchorOn('waited one minute', 3)
	});
	remarkOf.set(report.report, remark);
	if (finish) state = (await marking.finishMarking(as(state.revision), { marking: state.id })).marking;
	return state;
}

const give = (course: MarkingCourse, reports: HandedIn[], viewer: Viewer = course.instructor, key?: string) =>
	moderation.returnReports(
		act(viewer, {
			...(key && {
				repeatable: { userId: viewer.id, key, requestSha256: requestDigest('POST', '/returning', key) }
			})
		}),
		{ courseId: course.id, reports: reports.map((report) => report.report) }
	);
const takeBack = (course: MarkingCourse, reports: HandedIn[]) =>
	moderation.withdrawReturn(act(course.instructor), {
		courseId: course.id,
		reports: reports.map((report) => report.report)
	});
const lettersTo = (report: HandedIn) =>
	owner`select kind, payload from outbox where recipient = ${report.author.email} and kind = 'returned'`;

describe('before the return', () => {
	it('the author sees that it is with a marker and nothing of the marking', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const state = await mark(course, report);
		const sheet = await marking.returned(report.author, report.work);
		expect(sheet).toEqual({
			state: 'with-marker',
			attempt: 1,
			receivedAt: report.receivedAt.toISOString(),
			dueAt: '2026-11-20T21:00:00.000Z',
			report: null
		});
		expect((await refusalOf(marking.readMarking(report.author, state.id))).kind).toBe('not-found');
		const reply = marking.replyToRemark(act(report.author), {
			remark: remarkOf.get(report.report) ?? '',
			reply: uuidv7(),
			body: 'Thank you.'
		});
		expect((await refusalOf(reply)).kind).toBe('not-found');
	});

	it('what is not finished cannot be returned, and then nothing of the batch is', async () => {
		const course = await markingCourse();
		const [ready, begun, unmarked] = [
			await handedIn(course),
			await handedIn(course, { author: 'Chen Wu' }),
			await handedIn(course)
		];
		await mark(course, ready);
		await mark(course, begun, false);
		const refusal = await refusalOf(give(course, [ready, begun]));
		expect(refusal.kind).toBe('conflict');
		expect(refusal.message).toContain('Chen Wu');
		expect((await refusalOf(give(course, [unmarked]))).kind).toBe('conflict');
		const rows =
			await owner`select 1 from releases where report_id in ${owner([ready.report, begun.report])}`;
		expect(rows).toHaveLength(0);
		expect(await lettersTo(ready)).toHaveLength(0);
		const list = await moderation.readReturning(course.instructor, course.id);
		const states = new Map(list.reports.map((row) => [row.id, row.state]));
		expect([ready, begun, unmarked].map(({ report }) => states.get(report))).toEqual([
			'ready',
			'begun',
			'unmarked'
		]);
	});

	it('only instructors of the course may return or see the list', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		await mark(course, report);
		expect((await refusalOf(give(course, [report], course.grader))).kind).toBe('forbidden');
		expect((await refusalOf(give(course, [report], report.author))).kind).toBe('forbidden');
		expect((await refusalOf(give(course, [report], report.mate))).kind).toBe('not-found');
		expect((await refusalOf(moderation.readReturning(course.grader, course.id))).kind).toBe('forbidden');
		expect((await refusalOf(moderation.readReturning(course.stranger, course.id))).kind).toBe('not-found');
		const other = await markingCourse();
		expect((await refusalOf(give(other, [report]))).kind).toBe('not-found');
	});
});

describe('a return', () => {
	it('gives the marks after the late rule, and one letter to each author', async () => {
		const course = await markingCourse();
		const onTime = await handedIn(course);
		const late = await handedIn(course, { lateMinutes: 120, author: 'Chen Wu' });
		await mark(course, onTime);
		await mark(course, late);
		const answer = await give(course, [onTime, late]);
		expect(answer.returned.sort()).toEqual([onTime.report, late.report].sort());
		expect(answer.students).toBe(2);
		const marks = await owner`select report_id, n, source, points_hundredths, deduction_hundredths, reason
			from final_marks where report_id in ${owner([onTime.report, late.report])} order by points_hundredths desc`;
		// 5 % of 7.75 is 0.3875: to the hundredth 0.39.
		expect(
			marks.map((row) => [row['source'], row['points_hundredths'], row['deduction_hundredths']])
		).toEqual([
			['marking', 775, 0],
			['marking', 736, 39]
		]);
		expect(marks[1]?.['reason']).toBe(
			'Late by 2\u00a0h: 5\u00a0% off by this course\u2019s rule.'.replace('\u2019', "'")
		);
		const sheet = await marking.returned(late.author, late.work);
		if (sheet.state !== 'returned') throw new Error('not returned');
		expect(sheet.report.mark).toMatchObject({ points: 736, deduction: 39, maximum: 1100 });
		expect(sheet.report.criteria.map(({ title, level }) => [title, level])).toEqual([
			['Method', 2],
			['Uncertainty', 1],
			['Writing', 2]
		]);
		expect(sheet.report.remarks).toMatchObject([
			{ kind: 'to correct', body: 'The guide asks for two minutes.' }
		]);
		for (const report of [onTime, late]) expect(await lettersTo(report)).toHaveLength(1);
		const [letter] = await lettersTo(late);
		const { subject, text } = letters.returned(letter?.['payload'] as never);
		expect(subject).toBe('Back with you: Enthalpy of vaporization of water');
		expect(text).toContain(`/c/${course.slug}/w/${late.work}/returned`);
		expect(text).not.toContain('7.36');
	});

	it('repeated, at once or later, returns and mails once', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		await mark(course, report);
		const key = randomUUID();
		const answers = await Promise.all([
			give(course, [report], course.instructor, key),
			give(course, [report], course.instructor, key),
			give(course, [report])
		]);
		expect(answers[0]).toEqual(answers[1]);
		const again = await give(course, [report]);
		expect(again).toMatchObject({ returned: [], already: [report.report], students: 0 });
		const [counts] =
			await owner`select (select count(*)::int from releases where report_id = ${report.report}) as releases,
			(select count(*)::int from final_marks where report_id = ${report.report}) as marks`;
		expect(counts).toMatchObject({ releases: 1, marks: 1 });
		expect(await lettersTo(report)).toHaveLength(1);
	});

	it('shows nothing of it to team mates', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const state = await mark(course, report);
		await give(course, [report]);
		expect(await marking.returned(report.mate, report.work)).toEqual({ state: 'draft', report: null });
		expect((await refusalOf(marking.readMarking(report.mate, state.id))).kind).toBe('not-found');
		const reply = marking.replyToRemark(act(report.mate), {
			remark: remarkOf.get(report.report) ?? '',
			reply: uuidv7(),
			body: 'Mine?'
		});
		expect((await refusalOf(reply)).kind).toBe('not-found');
	});

	it('closes the marking: no level or remark changes under the author’s eyes', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const state = await mark(course, report);
		await give(course, [report]);
		const as = act(course.grader, { revision: state.revision });
		expect((await refusalOf(marking.reopenMarking(as, { marking: state.id }))).kind).toBe('conflict');
		const level = { marking: state.id, criterion: course.criteria.method, level: 0, reason: '' };
		expect((await refusalOf(marking.setLevel(as, level))).kind).toBe('conflict');
		const deleting = marking.deleteRemark(as, { remark: remarkOf.get(report.report) ?? '' });
		expect((await refusalOf(deleting)).kind).toBe('conflict');
	});

	it('lets the author answer a remark, once for each id', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		await mark(course, report);
		await give(course, [report]);
		const remark = remarkOf.get(report.report) ?? '';
		const reply = uuidv7();
		const answer = () =>
			marking.replyToRemark(act(report.author), { remark, reply, body: 'The bath drifted by 0.1 K.' });
		await answer();
		await answer();
		const sheet = await marking.returned(report.author, report.work);
		if (sheet.state !== 'returned') throw new Error('not returned');
		expect(sheet.report.remarks[0]?.replies).toMatchObject([
			{ id: reply, body: 'The bath drifted by 0.1 K.', own: true }
		]);
	});

	it('of two answers that take one id at once, one gets it and the other is told', async () => {
		const course = await markingCourse();
		const reports = [await handedIn(course), await handedIn(course)];
		for (const report of reports) await mark(course, report);
		await give(course, reports);
		for (let round = 0; round < 5; round++) {
			const reply = uuidv7();
			const outcomes = await Promise.allSettled(
				reports.map((report) =>
					marking.replyToRemark(act(report.author), {
						remark: remarkOf.get(report.report) ?? '',
						reply,
						body: 'The bath drifted.'
					})
				)
			);
			expect(outcomes.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
			const refused = outcomes.find((outcome) => outcome.status === 'rejected');
			expect((refused?.reason as Refusal).kind).toBe('conflict');
		}
	});
});

describe('taking a return back', () => {
	it('hides the marks again, keeps the history, and the next return mails anew', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		const state = await mark(course, report);
		const answer = await give(course, [report]);
		const list = await moderation.readReturning(course.instructor, course.id);
		expect(list.reports[0]).toMatchObject({ state: 'returned', undoUntil: answer.undoUntil });
		await takeBack(course, [report]);
		expect((await marking.returned(report.author, report.work)).state).toBe('with-marker');
		expect((await refusalOf(takeBack(course, [report]))).kind).toBe('conflict');
		const reopened = await marking.reopenMarking(act(course.grader, { revision: state.revision }), {
			marking: state.id
		});
		expect((await refusalOf(give(course, [report]))).kind).toBe('conflict');
		const changed = await marking.setLevel(act(course.grader, { revision: reopened.revision }), {
			marking: state.id,
			criterion: course.criteria.uncertainty,
			level: 2,
			reason: ''
		});
		await marking.finishMarking(act(course.grader, { revision: changed.revision }), { marking: state.id });
		await give(course, [report]);
		const marks =
			await owner`select n, points_hundredths from final_marks where report_id = ${report.report} order by n`;
		expect(marks.map((row) => [row['n'], row['points_hundredths']])).toEqual([
			[1, 775],
			[2, 1025]
		]);
		const releases = await owner`select action from releases where report_id = ${report.report} order by n`;
		expect(releases.map((row) => row['action'])).toEqual(['return', 'withdraw', 'return']);
		expect(await lettersTo(report)).toHaveLength(2);
	});

	it('ends after two hours', async () => {
		const course = await markingCourse();
		const report = await handedIn(course);
		await mark(course, report);
		await owner`insert into releases (report_id, n, action, by_id, created_at)
			values (${report.report}, 1, 'return', ${course.instructor.id}, now() - interval '2 hours 1 second')`;
		expect((await refusalOf(takeBack(course, [report]))).kind).toBe('too-late');
		const list = await moderation.readReturning(course.instructor, course.id);
		expect(list.reports[0]).toMatchObject({ state: 'returned', undoUntil: null });
	});
});
