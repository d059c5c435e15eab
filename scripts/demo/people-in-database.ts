import { sql } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { hashPassword, type Viewer } from '../../src/lib/server/auth';
import { database, schema } from '../../src/lib/server/db';
import { demoPassword } from './accounts';
import { administrator, emailOf, initialsOf, instructors, sections, teams } from './people';

export interface DemoCourse {
	id: string;
	people: Map<string, Viewer>;
	sectionIds: Map<string, string>;
	teamIds: Map<string, string>;
}

/** A set-up script is the one place beside the verbs that writes rows itself: there is nobody yet who could act. */
export async function insertCourse(zone: string): Promise<DemoCourse> {
	const db = database();
	const passwordHash = await hashPassword(demoPassword);
	const graders = [...new Set(sections.flatMap((section) => [...section.graders]))];
	const students = teams.flatMap((team) => team.students);
	const people = new Map<string, Viewer>();
	for (const name of [administrator, ...instructors, ...graders, ...students]) {
		const siteAdministrator = name === administrator;
		people.set(name, {
			id: uuidv7(),
			name,
			initials: initialsOf(name),
			email: emailOf(name),
			siteAdministrator,
			theme: 'system'
		});
	}
	const idOf = (name: string) => {
		const person = people.get(name);
		if (!person) throw new Error(`nobody called ${name}`);
		return person.id;
	};
	const id = uuidv7();
	const sectionIds = new Map<string, string>(sections.map((section) => [section.name, uuidv7()]));
	const teamIds = new Map(teams.map((team) => [team.name, uuidv7()]));
	const take = (map: Map<string, string>, key: string) => {
		const value = map.get(key);
		if (!value) throw new Error(`no ${key}`);
		return value;
	};
	await db.transaction(async (tx) => {
		await tx
			.insert(schema.users)
			.values(
				[...people.values()].map((person) => ({ ...person, passwordHash, emailVerifiedAt: new Date() }))
			);
		await tx.insert(schema.courses).values({
			id,
			slug: 'pc310',
			code: 'PC 310',
			title: 'Physical Chemistry Laboratory',
			institution: 'Harrow Point College',
			zone,
			startsOn: '2026-09-07',
			lateRule: {
				graceMinutes: 10,
				steps: [
					{ upToHours: 24, percent: 5 },
					{ upToHours: 48, percent: 15 },
					{ upToHours: 168, percent: 30 }
				],
				refuseAfterHours: null
			}
		});
		await tx
			.insert(schema.labSections)
			.values(sections.map(({ name, meets }) => ({ id: take(sectionIds, name), courseId: id, name, meets })));
		await tx.insert(schema.members).values([
			...instructors.map((name) => ({ courseId: id, userId: idOf(name), role: 'instructor' })),
			...graders.map((name) => ({ courseId: id, userId: idOf(name), role: 'grader' })),
			...teams.flatMap((team) =>
				team.students.map((name) => ({
					courseId: id,
					userId: idOf(name),
					role: 'student',
					labSectionId: take(sectionIds, team.section)
				}))
			)
		]);
		await tx.insert(schema.gradingSections).values(
			sections.flatMap((section) =>
				section.graders.map((name) => ({
					labSectionId: take(sectionIds, section.name),
					userId: idOf(name)
				}))
			)
		);
		await tx.insert(schema.teams).values(
			teams.map((team) => ({
				id: take(teamIds, team.name),
				courseId: id,
				labSectionId: take(sectionIds, team.section),
				name: team.name
			}))
		);
		await tx.insert(schema.teamMembers).values(
			teams.flatMap((team) =>
				team.students.map((name) => ({
					id: uuidv7(),
					teamId: take(teamIds, team.name),
					courseId: id,
					userId: idOf(name),
					during: sql`tstzrange(now() - interval '60 days', null)` as never
				}))
			)
		);
	});
	return { id, people, sectionIds, teamIds };
}
