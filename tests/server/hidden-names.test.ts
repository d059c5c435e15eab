import { expect, it } from 'vitest';
import * as marking from '../../src/lib/server/marking';
import * as moderation from '../../src/lib/server/moderation';
import { act } from '../factories';
import { handedIn, markingCourse, setLevels, type HandedIn } from './marking-rows';
import { ownDatabase } from './own-database';

await ownDatabase();

it('names stay hidden until all that one marks are returned, so that the rest cannot be told by who is missing', async () => {
	const course = await markingCourse();
	const { grader } = course;
	const first = await handedIn(course, { author: 'Ines Okafor' });
	const second = await handedIn(course, { author: 'Chen Wu' });
	// Another grader's report has no part in it.
	await handedIn(course, { section: 'thursday' });
	const give = async (report: HandedIn) => {
		const state = await setLevels(course, grader, report.alias, [2, 1, 2]);
		await marking.finishMarking(act(grader, { revision: state.revision }), { marking: state.id });
		await moderation.returnReports(act(course.instructor), {
			courseId: course.id,
			reports: [report.report]
		});
	};
	const seen = async () => {
		const sitting = await marking.openSitting(act(grader), { assignment: course.assignmentId });
		const sheet = await marking.openSheet(grader, { course: course.slug, alias: first.alias });
		return {
			hidden: sitting.namesHidden,
			authors: sitting.reports.map(({ author }) => author).sort(),
			received: sitting.reports.map(({ received }) => received),
			sheet: sheet.author
		};
	};
	const nothing = { hidden: true, authors: [null, null], received: [null, null], sheet: null };
	expect(await seen()).toEqual(nothing);
	await give(first);
	expect(await seen()).toEqual(nothing);
	await give(second);
	expect(await seen()).toEqual({
		hidden: false,
		authors: ['Chen Wu', 'Ines Okafor'],
		received: ['on time', 'on time'],
		sheet: 'Ines Okafor'
	});
	// A return that is taken back hides them again.
	await moderation.withdrawReturn(act(course.instructor), { courseId: course.id, reports: [second.report] });
	expect(await seen()).toEqual(nothing);
});
