import { sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { database, schema } from '../../src/lib/server/db';
import * as readings from '../../src/lib/server/readings';
import { addToTeam, join, makePerson } from '../factories';
import type { Viewer } from '../../src/lib/server/auth';

export interface Bench {
	courseId: string;
	assignmentId: string;
	teamId: string;
	workId: string;
	student: Viewer;
	mate: Viewer;
	grader: Viewer;
	instructor: Viewer;
	stranger: Viewer;
	/** the team's readings */
	readingsId: string;
	/** a team section */
	resultsId: string;
	/** a section of `student` alone */
	abstractId: string;
}

let counter = 0;

/** A team at its bench: what live documents need, without an experiment's content. */
export async function makeBench(): Promise<Bench> {
	const db = database();
	counter += 1;
	const [
		courseId,
		labSectionId,
		teamId,
		experimentId,
		versionId,
		rubricId,
		rubricVersionId,
		assignmentId,
		workId
	] = Array.from({ length: 9 }, () => uuidv7()) as [
		string,
		string,
		string,
		string,
		string,
		string,
		string,
		string,
		string
	];
	const tag = `${process.pid}-${Date.now().toString(36)}-${counter}`;
	await db.insert(schema.courses).values({
		id: courseId,
		slug: `live-${tag}`,
		code: 'PC 310',
		title: 'Physical Chemistry Laboratory',
		institution: 'Harrow Point College',
		zone: 'America/Halifax',
		startsOn: '2026-09-07',
		lateRule: {}
	});
	await db
		.insert(schema.labSections)
		.values({ id: labSectionId, courseId, name: 'Tuesday', meets: 'Tuesday 13:00' });
	await db.insert(schema.teams).values({ id: teamId, courseId, labSectionId, name: 'Linden' });
	const student = await makePerson('Ines Okafor');
	const mate = await makePerson('Tomas Lindqvist');
	const grader = await makePerson('Amal Haddad');
	const instructor = await makePerson('Ruth Osei');
	const stranger = await makePerson('Nobody Here');
	await join(courseId, student, 'student', labSectionId);
	await join(courseId, mate, 'student', labSectionId);
	await join(courseId, grader, 'grader', labSectionId);
	await join(courseId, instructor, 'instructor');
	await addToTeam(courseId, teamId, student);
	await addToTeam(courseId, teamId, mate);
	const bytes = new TextEncoder().encode(`{"tag":"${tag}"}`);
	await db.execute(
		sql`insert into parts (sha256, bytes) values (sha256(${bytes}::bytea), ${bytes}::bytea) on conflict do nothing`
	);
	await db
		.insert(schema.experiments)
		.values({ id: experimentId, slug: `e-${tag}`, title: 'Vapour pressure' });
	await db.execute(
		sql`insert into experiment_versions (id, experiment_id, n, part) values (${versionId}, ${experimentId}, 1, sha256(${bytes}::bytea))`
	);
	await db.insert(schema.rubrics).values({ id: rubricId, slug: `r-${tag}`, title: 'Report' });
	await db.insert(schema.rubricVersions).values({ id: rubricVersionId, rubricId, n: 1, title: 'Report' });
	await db.insert(schema.assignments).values({
		id: assignmentId,
		courseId,
		experimentVersionId: versionId,
		rubricVersionId,
		title: 'Vapour pressure',
		position: 1,
		dueLocal: '2199-12-10 17:00:00',
		closesLocal: '2199-12-12 17:00:00'
	});
	await db.insert(schema.work).values({ id: workId, assignmentId, teamId });
	const documents = await db.transaction((tx) =>
		readings.ensureDocuments(
			tx,
			workId,
			[
				{ key: 'abstract', owner: 'author' },
				{ key: 'results', owner: 'team' }
			],
			student.id
		)
	);
	const idOf = (key: string) => documents.find((document) => document.key === key)?.id ?? '';
	return {
		courseId,
		assignmentId,
		teamId,
		workId,
		student,
		mate,
		grader,
		instructor,
		stranger,
		readingsId: idOf('readings'),
		resultsId: idOf('results'),
		abstractId: idOf('abstract')
	};
}
