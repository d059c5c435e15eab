import { asc, eq } from 'drizzle-orm';
import type { SpreadShape } from '$lib/contracts/moderation';
import { authorise, type Viewer } from '../auth';
import { database, schema } from '../db';
import { notFound } from '../errors';
import * as experiments from '../experiments';
import { markedReports, type Marked } from './marked';
import { spreadOf } from './spread-of';

const { assignments } = schema;

export interface SpreadInput {
	courseId: string;
	assignment?: string | undefined;
}

/** The finished markings of one assignment: the asked one, else the first of the course that has any, else its first. */
export async function markedOf(viewer: Viewer, { courseId, assignment }: SpreadInput) {
	const db = database();
	await authorise(db, viewer, 'course.spread', courseId);
	const all = await db
		.select({ id: assignments.id, title: assignments.title })
		.from(assignments)
		.where(eq(assignments.courseId, courseId))
		.orderBy(asc(assignments.position));
	if (assignment !== undefined && !all.some(({ id }) => id === assignment)) throw notFound();
	const rows = await markedReports(db, courseId, { assignment });
	const wanted = assignment ?? rows.find((row) => row.finished)?.assignment ?? all[0]?.id;
	const handedIn = rows.filter((row) => row.assignment === wanted);
	return {
		assignments: all,
		assignment: all.find(({ id }) => id === wanted) ?? null,
		handedIn,
		finished: handedIn.filter(
			(row): row is Marked & { marker: string } => row.finished && row.marker !== null
		),
		rubric: wanted === undefined ? null : await experiments.rubricOf(db, wanted)
	};
}

/** Distribution of totals and criteria of an assignment's finished markings, returned or not. */
export async function readSpread(viewer: Viewer, input: SpreadInput): Promise<SpreadShape> {
	const { assignments: all, assignment, handedIn, finished, rubric } = await markedOf(viewer, input);
	const criteria = rubric?.criteria ?? [];
	const maximum = criteria.reduce(
		(sum, { levels }) => sum + levels.reduce((most, level) => Math.max(most, level.pointsHundredths), 0),
		0
	);
	return {
		assignment,
		assignments: all,
		...spreadOf(
			finished.map(({ labSection, marker, total, levels }) => ({
				labSection,
				grader: marker,
				points: total.points / 100,
				levels
			})),
			criteria.map(({ id, title, levels }) => ({
				id,
				title,
				levels: levels.map(({ level, text }) => ({ level, text }))
			})),
			handedIn.length,
			maximum / 100
		)
	};
}
