import { sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { Act, Viewer } from '../src/lib/server/auth';
import { database, schema } from '../src/lib/server/db';
import { Refusal } from '../src/lib/server/errors';
import * as experiments from '../src/lib/server/experiments';

/** What a test needs of a course, made with few words. Everything is random enough not to collide. */

let counter = 0;
const next = () => `${Date.now().toString(36)}${(counter++).toString(36)}`;

export const act = (viewer: Viewer, extra: Partial<Act> = {}): Act => ({ viewer, ...extra });

/** What a verb refused with; anything else that it does fails the test. */
export async function refusalOf(promise: Promise<unknown>): Promise<Refusal> {
	const thrown: unknown = await promise.then(
		() => undefined,
		(reason: unknown) => reason
	);
	if (!(thrown instanceof Refusal)) throw new Error('expected a refusal', { cause: thrown });
	return thrown;
}

export async function makePerson(
	name = 'Ada Quill',
	over: { siteAdministrator?: boolean } = {}
): Promise<Viewer> {
	const id = uuidv7();
	const email = `${name.toLowerCase().replaceAll(/[^a-z]+/g, '.')}.${next()}@harrow-point.example`;
	const initials = name
		.split(' ')
		.map((word) => word[0] ?? '')
		.join('');
	await database()
		.insert(schema.users)
		.values({
			id,
			email,
			name,
			initials,
			emailVerifiedAt: new Date(),
			siteAdministrator: over.siteAdministrator ?? false
		});
	return { id, email, name, initials, siteAdministrator: over.siteAdministrator ?? false, theme: 'system' };
}

export async function join(
	courseId: string,
	viewer: Viewer,
	role: 'student' | 'grader' | 'instructor',
	labSectionId: string | null = null
): Promise<void> {
	await database()
		.insert(schema.members)
		.values({ courseId, userId: viewer.id, role, labSectionId: role === 'student' ? labSectionId : null });
	if (role === 'grader' && labSectionId) {
		await database().insert(schema.gradingSections).values({ labSectionId, userId: viewer.id });
	}
}

export async function addToTeam(courseId: string, teamId: string, viewer: Viewer): Promise<void> {
	await database()
		.insert(schema.teamMembers)
		.values({
			id: uuidv7(),
			teamId,
			courseId,
			userId: viewer.id,
			during: sql`tstzrange(now() - interval '1 day', null)` as never
		});
}

export const vaporization = new URL('../templates/vaporization-of-water', import.meta.url).pathname;

export interface MadeCourse {
	id: string;
	slug: string;
	zone: string;
	labSectionId: string;
	otherLabSectionId: string;
	teamId: string;
	otherTeamId: string;
	assignmentId: string;
	workId: string;
	student: Viewer;
	mate: Viewer;
	otherStudent: Viewer;
	grader: Viewer;
	otherGrader: Viewer;
	instructor: Viewer;
	stranger: Viewer;
}

/**
 * A course with two lab sections, each with a team and a grader; the first team (student and mate) has work on one
 * assignment. Due in a week and closing two days later unless said, in `zone`.
 */
export async function makeCourse(
	over: {
		zone?: string;
		dueLocal?: string;
		closesLocal?: string;
		lateRule?: unknown;
		hideNames?: boolean;
	} = {}
): Promise<MadeCourse> {
	const db = database();
	const id = uuidv7();
	const slug = `pc-${next()}`;
	const zone = over.zone ?? 'America/Halifax';
	const local = (days: number) =>
		new Date(Date.now() + days * 86_400_000).toISOString().slice(0, 16).replace('T', ' ');
	await db.insert(schema.courses).values({
		id,
		slug,
		code: 'PC 310',
		title: 'Physical Chemistry Laboratory',
		institution: 'Harrow Point College',
		zone,
		startsOn: '2026-09-07',
		lateRule: over.lateRule ?? {
			graceMinutes: 10,
			steps: [
				{ upToHours: 24, percent: 5 },
				{ upToHours: 48, percent: 20 }
			],
			refuseAfterHours: null
		}
	});
	const [labSectionId, otherLabSectionId, teamId, otherTeamId, assignmentId, workId] = Array.from(
		{ length: 6 },
		() => uuidv7()
	) as [string, string, string, string, string, string];
	await db.insert(schema.labSections).values([
		{ id: labSectionId, courseId: id, name: 'Tuesday', meets: 'Tuesday 13:00' },
		{ id: otherLabSectionId, courseId: id, name: 'Thursday', meets: 'Thursday 9:00' }
	]);
	await db.insert(schema.teams).values([
		{ id: teamId, courseId: id, labSectionId, name: 'Linden' },
		{ id: otherTeamId, courseId: id, labSectionId: otherLabSectionId, name: 'Rowan' }
	]);
	const student = await makePerson('Ines Okafor');
	const mate = await makePerson('Tomas Lindqvist');
	const otherStudent = await makePerson('Priya Raman');
	const grader = await makePerson('Amal Haddad');
	const otherGrader = await makePerson('Jonas Weber');
	const instructor = await makePerson('Ruth Osei');
	const stranger = await makePerson('Nobody Here');
	await join(id, student, 'student', labSectionId);
	await join(id, mate, 'student', labSectionId);
	await join(id, otherStudent, 'student', otherLabSectionId);
	await join(id, grader, 'grader', labSectionId);
	await join(id, otherGrader, 'grader', otherLabSectionId);
	await join(id, instructor, 'instructor');
	await addToTeam(id, teamId, student);
	await addToTeam(id, teamId, mate);
	await addToTeam(id, otherTeamId, otherStudent);
	const published = await db.transaction(async (tx) =>
		experiments.publish(tx, await experiments.readTemplate(vaporization))
	);
	await db.insert(schema.assignments).values({
		id: assignmentId,
		courseId: id,
		experimentVersionId: published.experimentVersionId,
		rubricVersionId: published.rubricVersionId,
		title: 'Enthalpy of vaporization of water',
		position: 1,
		dueLocal: over.dueLocal ?? local(7),
		closesLocal: over.closesLocal ?? local(9),
		hideNames: over.hideNames ?? true
	});
	await db.insert(schema.work).values({ id: workId, assignmentId, teamId });
	return {
		id,
		slug,
		zone,
		labSectionId,
		otherLabSectionId,
		teamId,
		otherTeamId,
		assignmentId,
		workId,
		student,
		mate,
		otherStudent,
		grader,
		otherGrader,
		instructor,
		stranger
	};
}
