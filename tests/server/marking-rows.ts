import { createHash, randomInt } from 'node:crypto';
import { eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { engineVersion, evaluate, type Worksheet } from '../../src/lib/worksheets';
import type { MarkingState } from '../../src/lib/contracts/marking';
import type { Viewer } from '../../src/lib/server/auth';
import { database, schema } from '../../src/lib/server/db';
import * as marking from '../../src/lib/server/marking';
import { storeSnapshot } from '../../src/lib/server/reports/store-snapshot';
import { act, addToTeam, join, makePerson } from '../factories';

// Rows of handed-in reports, made without the areas that lead up to them, with a rubric whose points are not round.

export const emptyWorksheet: Worksheet = {
	slug: 'none',
	title: 'None',
	version: 1,
	summary: '',
	guide: '',
	hazards: { notice: '', protection: '', whenItGoesWrong: '', substances: [] },
	constants: [],
	parameters: [],
	tables: [],
	fits: [],
	results: [],
	comparisons: [],
	figures: [],
	requirements: [],
	mistakes: [],
	outline: [],
	rubrics: { prelab: null, notebook: null, report: { title: 'None', criteria: [] } },
	order: []
};

async function part(bytes: Uint8Array): Promise<Uint8Array> {
	const sha256 = createHash('sha256').update(bytes).digest();
	await database().insert(schema.parts).values({ sha256, bytes }).onConflictDoNothing();
	return sha256;
}

/** Points in hundredths of each level, criterion by criterion. */
export const points = { method: [0, 150, 325, 400], uncertainty: [0, 250, 500], writing: [0, 75, 200] };
export const maximumHundredths = 400 + 500 + 200;

export interface MarkingCourse {
	id: string;
	slug: string;
	assignmentId: string;
	/** by key */
	criteria: { method: string; uncertainty: string; writing: string };
	tuesday: string;
	thursday: string;
	grader: Viewer;
	/** grades Tuesday as well */
	colleague: Viewer;
	/** grades Thursday only */
	elsewhere: Viewer;
	instructor: Viewer;
	stranger: Viewer;
}

/** A course with lab sections Tuesday (two graders) and Thursday (another), one assignment, names hidden unless said. */
export async function markingCourse(over: { hideNames?: boolean } = {}): Promise<MarkingCourse> {
	const db = database();
	const id = uuidv7();
	const slug = `m-${id.slice(-12)}`;
	const rule = { graceMinutes: 10, steps: [{ upToHours: 24, percent: 5 }], refuseAfterHours: null };
	await db.insert(schema.courses).values({
		id,
		slug,
		code: 'PC 310',
		title: 'Physical Chemistry Laboratory',
		institution: 'Harrow Point College',
		zone: 'America/Halifax',
		startsOn: '2026-09-07',
		lateRule: rule
	});
	const [tuesday, thursday, experimentId, versionId, rubricId, rubricVersionId, assignmentId] = Array.from(
		{ length: 7 },
		() => uuidv7()
	) as [string, string, string, string, string, string, string];
	await db.insert(schema.labSections).values([
		{ id: tuesday, courseId: id, name: 'Tuesday', meets: 'Tuesday 13:00' },
		{ id: thursday, courseId: id, name: 'Thursday', meets: 'Thursday 9:00' }
	]);
	const worksheet = await part(Buffer.from(JSON.stringify(emptyWorksheet)));
	await db.insert(schema.experiments).values({ id: experimentId, slug, title: 'Vaporization' });
	await db.insert(schema.experimentVersions).values({ id: versionId, experimentId, n: 1, part: worksheet });
	await db.insert(schema.rubrics).values({ id: rubricId, slug, title: 'Report' });
	await db.insert(schema.rubricVersions).values({ id: rubricVersionId, rubricId, n: 1, title: 'Report' });
	const criteria = { method: uuidv7(), uncertainty: uuidv7(), writing: uuidv7() };
	for (const [position, key] of (['method', 'uncertainty', 'writing'] as const).entries()) {
		const title = key.charAt(0).toUpperCase() + key.slice(1);
		await db.insert(schema.criteria).values({ id: criteria[key], rubricVersionId, key, position, title });
		await db.insert(schema.levels).values(
			points[key].map((pointsHundredths, level) => ({
				criterionId: criteria[key],
				level,
				text: `${key} at level ${String(level)}`,
				pointsHundredths
			}))
		);
	}
	await db.insert(schema.assignments).values({
		id: assignmentId,
		courseId: id,
		experimentVersionId: versionId,
		rubricVersionId,
		title: 'Enthalpy of vaporization of water',
		position: 1,
		dueLocal: '2026-11-20 17:00',
		closesLocal: '2026-11-27 17:00',
		hideNames: over.hideNames ?? true
	});
	const grader = await makePerson('Amal Haddad');
	const colleague = await makePerson('Bo Lindgren');
	const elsewhere = await makePerson('Jonas Weber');
	const instructor = await makePerson('Ruth Osei');
	await join(id, grader, 'grader', tuesday);
	await join(id, colleague, 'grader', tuesday);
	await join(id, elsewhere, 'grader', thursday);
	await join(id, instructor, 'instructor');
	const stranger = await makePerson('Nobody Here');
	return {
		id,
		slug,
		assignmentId,
		criteria,
		tuesday,
		thursday,
		grader,
		colleague,
		elsewhere,
		instructor,
		stranger
	};
}

export interface HandedIn {
	author: Viewer;
	mate: Viewer;
	report: string;
	snapshot: string;
	alias: string;
	work: string;
	team: string;
	receivedAt: Date;
}

/** A team of two in a lab section, of whom the author has handed in; `lateMinutes` after the due instant. */
export async function handedIn(
	course: MarkingCourse,
	over: { section?: 'tuesday' | 'thursday'; author?: string; lateMinutes?: number; text?: string } = {}
): Promise<HandedIn> {
	const db = database();
	const [team, work, report, snapshot] = Array.from({ length: 4 }, () => uuidv7()) as [
		string,
		string,
		string,
		string
	];
	const labSectionId = course[over.section ?? 'tuesday'];
	await db
		.insert(schema.teams)
		.values({ id: team, courseId: course.id, labSectionId, name: `Team ${team.slice(-6)}` });
	const author = await makePerson(over.author ?? 'Ines Okafor');
	const mate = await makePerson('Tomas Lindqvist');
	for (const person of [author, mate]) {
		await join(course.id, person, 'student', labSectionId);
		await addToTeam(course.id, team, person);
	}
	await db.insert(schema.work).values({ id: work, assignmentId: course.assignmentId, teamId: team });
	const alias = `linden-${String(randomInt(1e9)).padStart(9, '0')}`;
	await db.insert(schema.reports).values({ id: report, workId: work, authorId: author.id, alias });
	const dueAt = new Date('2026-11-20T21:00:00.000Z');
	const receivedAt = new Date(dueAt.getTime() + (over.lateMinutes ?? -60) * 60_000);
	const document = uuidv7();
	await db
		.insert(schema.documents)
		.values({ id: document, workId: work, authorId: author.id, kind: 'section', key: 'abstract' });
	const readings = { parameters: {}, tables: {} };
	await db.transaction(async (tx) => {
		await storeSnapshot(tx, {
			id: snapshot,
			report: { id: report },
			attempt: 1,
			byId: author.id,
			receivedAt,
			dueAt,
			evaluation: { ...evaluate(emptyWorksheet, readings), engine: engineVersion },
			content: {
				worksheet: emptyWorksheet,
				readings,
				readingsDocument: { id: uuidv7(), seq: 0 },
				sections: [
					{
						position: 1,
						key: 'abstract',
						title: 'Abstract',
						owner: 'author',
						document,
						seq: 0,
						text: over.text ?? 'We waited one minute, because the bath drifted.'
					}
				]
			}
		});
		await tx.update(schema.reports).set({ countedSnapshotId: snapshot }).where(eq(schema.reports.id, report));
	});
	return { author, mate, report, snapshot, alias, work, team, receivedAt };
}

/** Begins a marking, sets method, uncertainty and writing to their levels, and returns the newest state. */
export async function setLevels(
	course: MarkingCourse,
	viewer: Viewer,
	alias: string,
	levels: readonly number[]
): Promise<MarkingState> {
	let state = await marking.openMarking(act(viewer), { alias });
	const { method, uncertainty, writing } = course.criteria;
	for (const [index, criterion] of [method, uncertainty, writing].entries()) {
		state = await marking.setLevel(act(viewer, { revision: state.revision }), {
			marking: state.id,
			criterion,
			level: levels[index] ?? 0,
			reason: ''
		});
	}
	return state;
}

export const anchorOn = (exact: string, start: number) => ({
	section: 1,
	projection: 1,
	links: [],
	selectors: [
		{ type: 'TextQuoteSelector' as const, exact, prefix: '', suffix: '' },
		{ type: 'TextPositionSelector' as const, start, end: start + exact.length }
	]
});
