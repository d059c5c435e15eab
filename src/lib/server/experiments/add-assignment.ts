import { eq, sql } from 'drizzle-orm';
import { join } from 'node:path';
import { v7 as uuidv7 } from 'uuid';
import * as audit from '../audit';
import { authorise, type Act } from '../auth';
import { mustBeInOrder } from '../courses';
import { schema, transact } from '../db';
import { notFound, unprocessable } from '../errors';
import { libraryFolder } from './library';
import { publish } from './publish';
import { readTemplate } from './read-template';

const { assignments, courses } = schema;

export interface NewAssignment {
	courseId: string;
	/** slug of an experiment of the library */
	experiment: string;
	/** 'YYYY-MM-DDTHH:MM' in the course's zone */
	dueLocal: string;
	closesLocal: string;
	hideNames: boolean;
}

async function worksheetFrom(slug: string) {
	try {
		return await readTemplate(join(libraryFolder, slug));
	} catch (thrown) {
		if ((thrown as NodeJS.ErrnoException).code !== 'ENOENT') throw thrown;
		throw unprocessable(`There is no experiment ${slug}. Choose one of the list.`, {
			experiment: 'Not in the library.'
		});
	}
}

/** Sets an experiment in a course: publishes the newest form of its worksheet and rubric, and gives it its dates. */
export async function addAssignment(act: Act, input: NewAssignment): Promise<{ id: string; title: string }> {
	mustBeInOrder(input);
	const worksheet = await worksheetFrom(input.experiment);
	return transact(act.repeatable, async (tx) => {
		const [course] = await tx
			.select({ id: courses.id })
			.from(courses)
			.where(eq(courses.id, input.courseId))
			.for('update');
		if (!course) throw notFound();
		await authorise(tx, act.viewer, 'course.change', course.id);
		const { experimentVersionId, rubricVersionId } = await publish(tx, worksheet);
		const [last] = await tx
			.select({ position: sql<number>`coalesce(max(${assignments.position}), 0)::int` })
			.from(assignments)
			.where(eq(assignments.courseId, course.id));
		const id = uuidv7();
		await tx.insert(assignments).values({
			id,
			courseId: course.id,
			experimentVersionId,
			rubricVersionId,
			title: worksheet.title,
			position: (last?.position ?? 0) + 1,
			dueLocal: input.dueLocal.replace('T', ' '),
			closesLocal: input.closesLocal.replace('T', ' '),
			hideNames: input.hideNames
		});
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: course.id,
			action: 'assignment.add',
			subjectKind: 'assignment',
			subjectId: id,
			detail: { experiment: input.experiment }
		});
		return { id, title: worksheet.title };
	});
}
