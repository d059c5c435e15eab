import { and, eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { seedReadings, seedSection } from '../../src/lib/collab';
import { describeSelection, projectSection, shownResults } from '../../src/lib/reports';
import type { Viewer } from '../../src/lib/server/auth';
import { database, schema } from '../../src/lib/server/db';
import * as files from '../../src/lib/server/files';
import * as experiments from '../../src/lib/server/experiments';
import * as marking from '../../src/lib/server/marking';
import * as moderation from '../../src/lib/server/moderation';
import * as readings from '../../src/lib/server/readings';
import * as reports from '../../src/lib/server/reports';
import { engineVersion, evaluate, type Readings } from '../../src/lib/worksheets';
import { makeCourse, makePerson } from '../factories';
import type { Scene, Stage } from './permission-table';

/** Boiling points at four pressures, as typed. */
const typed: Readings = {
	parameters: { p_b: '756.2' },
	tables: {
		readings: [
			['82.91', '400.2'],
			['87.62', '480.1'],
			['91.60', '559.6'],
			['95.27', '640.3'],
			['98.41', '720.0'],
			['99.99', '760.4']
		].map(([t = '', p = '']) => ({ id: uuidv7(), status: 'used' as const, cells: { t, p } }))
	}
};

const texts: Record<string, string> = {
	abstract: 'Water was boiled at six pressures; the slope gives :value[H_vap].',
	results: 'The line follows.\n\n::figure[line]'
};

/** A course whose first student's report has come as far as `stage`, through the verbs that people use. */
export async function makeScene(stage: Stage): Promise<Scene & { administrator: Viewer }> {
	const course = await makeCourse();
	const administrator = await makePerson('Wendell Park', { siteAdministrator: true });
	const { student, grader, instructor } = course;
	const report = await reports.openReport(student, course.workId);
	await database().transaction(async (tx) => {
		await readings.seedDocument(tx, report.readings.document, seedReadings(typed));
		for (const section of report.sections) {
			const text = texts[section.key];
			if (text) await readings.seedDocument(tx, section.document, seedSection(text));
		}
	});
	const worksheet = await experiments.worksheetOf(database(), course.assignmentId);
	const results = shownResults(evaluate(worksheet, typed));
	const rubric = await experiments.rubricOf(database(), course.assignmentId);
	const criterion = rubric.criteria[0]?.id ?? '';
	const kept = await marking.keepRemark(
		{ viewer: grader },
		{ courseId: course.id, kind: 'note', body: 'Name the source.' }
	);
	const { id: file } = await files.keepFile(
		{ viewer: student },
		{
			subject: { kind: 'work', id: course.workId },
			name: 'run.csv',
			bytes: Buffer.from('t,p\n82.91,400.2\n'),
			mediaType: 'text/csv'
		}
	);
	const scene = {
		...course,
		administrator,
		report: report.id,
		alias: report.alias,
		readings: report.readings.document,
		abstract: report.sections.find(({ key }) => key === 'abstract')?.document ?? '',
		results,
		engine: engineVersion,
		criterion,
		kept: kept.id,
		snapshot: '',
		marking: '',
		revision: 0,
		remark: '',
		sitting: '',
		file
	};
	if (stage === 'draft') return scene;

	const handed = await reports.handIn(
		{ viewer: student },
		{ report: report.id, engine: engineVersion, results }
	);
	scene.snapshot = handed.attempt.id;
	scene.sitting = (await marking.openSitting({ viewer: grader }, { assignment: course.assignmentId })).id;
	let state = await marking.openMarking({ viewer: grader }, { alias: report.alias });
	const act = () => ({ viewer: grader, revision: state.revision });
	const snapshot = await reports.readSnapshot(database(), handed.attempt.id);
	const [first] = snapshot.sections;
	const projected = first && describeSelection(projectSection(first.text), 0, 5);
	if (!first || !projected) throw new Error('the abstract is gone');
	scene.remark = uuidv7();
	state = await marking.addRemark(act(), {
		marking: state.id,
		remark: scene.remark,
		kind: 'note',
		body: 'At which temperature?',
		anchor: { section: first.position, ...projected }
	});
	if (stage !== 'handed in') {
		for (const { id } of rubric.criteria) {
			state = await marking.setLevel(act(), { marking: state.id, criterion: id, level: 3, reason: '' });
		}
		state = (await marking.finishMarking(act(), { marking: state.id })).marking;
	}
	if (stage === 'returned') {
		await moderation.returnReports({ viewer: instructor }, { courseId: course.id, reports: [report.id] });
		const [row] = await database()
			.select()
			.from(schema.markings)
			.where(and(eq(schema.markings.id, state.id)));
		state = { ...state, revision: row?.revision ?? state.revision };
	}
	scene.marking = state.id;
	scene.revision = state.revision;
	return scene;
}
