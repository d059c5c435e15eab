import { v7 as uuidv7 } from 'uuid';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { schema, transact } from '../db';
import { conflict, unprocessable } from '../errors';

const { courses, labSections } = schema;

/** What a new course begins with; its instructors change it. Common practice: a little grace, then growing deductions. */
const firstLateRule = {
	graceMinutes: 10,
	steps: [
		{ upToHours: 24, percent: 5 },
		{ upToHours: 48, percent: 15 }
	],
	refuseAfterHours: null
};

function mustBeZone(zone: string): void {
	try {
		new Intl.DateTimeFormat('en', { timeZone: zone });
	} catch {
		throw unprocessable(`${zone} is not a time zone. Use a name such as America/Halifax.`, {
			zone: 'A name such as America/Halifax.'
		});
	}
}

export interface NewCourse {
	slug: string;
	code: string;
	title: string;
	institution: string;
	zone: string;
}

/** Opens a course. For site administrators, who then invite its first instructor. */
export async function addCourse(act: Act, input: NewCourse): Promise<{ id: string; slug: string }> {
	mustBeZone(input.zone);
	return transact(act.repeatable, async (tx) => {
		await authorise(tx, act.viewer, 'site.manage', 'site');
		const id = uuidv7();
		const startsOn = new Date().toISOString().slice(0, 10);
		const [made] = await tx
			.insert(courses)
			.values({ id, startsOn, lateRule: firstLateRule, ...input })
			.onConflictDoNothing({ target: courses.slug })
			.returning({ id: courses.id });
		if (!made) {
			throw conflict(`There is a course at /c/${input.slug} already. Choose another short name.`);
		}
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: id,
			action: 'course.add',
			subjectKind: 'course',
			subjectId: id
		});
		return { id, slug: input.slug };
	});
}

/** Adds a lab section: a group that meets at a set time. */
export async function addLabSection(
	act: Act,
	input: { courseId: string; name: string; meets: string }
): Promise<{ id: string }> {
	return transact(act.repeatable, async (tx) => {
		await authorise(tx, act.viewer, 'course.change', input.courseId);
		const id = uuidv7();
		const [made] = await tx
			.insert(labSections)
			.values({ id, ...input })
			.onConflictDoNothing()
			.returning({ id: labSections.id });
		if (!made) throw conflict(`There is a lab section ${input.name} already. Choose another name.`);
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: input.courseId,
			action: 'labSection.add',
			subjectKind: 'labSection',
			subjectId: id
		});
		return { id };
	});
}
