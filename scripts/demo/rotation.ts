import { v7 as uuidv7 } from 'uuid';
import { seedReadings, seedSection } from '../../src/lib/collab';
import * as courses from '../../src/lib/server/courses';
import { database, schema } from '../../src/lib/server/db';
import * as experiments from '../../src/lib/server/experiments';
import * as readings from '../../src/lib/server/readings';
import * as reports from '../../src/lib/server/reports';
import type { Readings } from '../../src/lib/worksheets';
import { teams, type DemoTeam } from './people';
import type { DemoCourse } from './people-in-database';
import { drafts } from './rotation-texts';
import { exampleSession, rotating, simulatedSession, templateFolder, type Rotating } from './sessions';

/** The team whose members a newcomer may sign in as has begun all of them, with the readings beside the experiments. */
const aheadOfAll = 'Linden';
const weekMs = 7 * 24 * 3_600_000;

/** Wall-clock end of an afternoon some weeks from now, in the course's zone, as the database keeps it. */
function afternoon(now: Date, weeks: number, zone: string): string {
	const at = new Date(now.getTime() + weeks * weekMs);
	return `${new Intl.DateTimeFormat('sv-SE', { timeZone: zone, dateStyle: 'short' }).format(at)} 17:00`;
}

/**
 * The other experiments of the course, in rotation: in the same week a third of the teams is at each of them, and each
 * team has already begun the first of its own.
 */
export async function loadRotation(
	course: DemoCourse,
	{ now, zone, instructor, say }: { now: Date; zone: string; instructor: string; say: (text: string) => void }
): Promise<void> {
	for (const [e, slug] of rotating.entries()) {
		const worksheet = await experiments.readTemplate(templateFolder(slug));
		say(worksheet.title);
		const weeksOf = (group: number) => 1 + ((e - group + rotating.length) % rotating.length);
		const dates = (weeks: number) => ({
			dueLocal: afternoon(now, weeks, zone),
			closesLocal: afternoon(now, weeks + 2 / 7, zone)
		});
		const assignment = uuidv7();
		await database().transaction(async (tx) => {
			const { experimentVersionId, rubricVersionId } = await experiments.publish(tx, worksheet);
			await tx.insert(schema.assignments).values({
				id: assignment,
				courseId: course.id,
				experimentVersionId,
				rubricVersionId,
				title: worksheet.title,
				position: e + 2,
				// the first to have it set the date; an extension never shortens one
				...dates(1)
			});
			await tx.insert(schema.extensions).values(
				teams.flatMap(({ name }, index) => {
					const teamId = course.teamIds.get(name);
					const group = index % rotating.length;
					if (weeksOf(group) === 1 || !teamId) return [];
					const reason = 'Rotation';
					return [
						{
							id: uuidv7(),
							assignmentId: assignment,
							teamId,
							...dates(weeksOf(group)),
							reason,
							grantedBy: instructor
						}
					];
				})
			);
		});
		for (const [index, team] of teams.entries()) {
			if (team.name === aheadOfAll)
				await begin(course, team, assignment, slug, await exampleSession(slug, worksheet));
			else if (weeksOf(index % rotating.length) === 1)
				await begin(course, team, assignment, slug, simulatedSession(slug, 1000 * (e + 1) + index));
		}
	}
}

async function begin(
	course: DemoCourse,
	team: DemoTeam,
	assignment: string,
	slug: Rotating,
	session: Readings
): Promise<void> {
	const [author] = team.students.map((name) => course.people.get(name));
	if (!author) throw new Error(`nobody in Team ${team.name}`);
	const { workId } = await courses.startWork({ viewer: author }, { assignment });
	const report = await reports.openReport(author, workId);
	await database().transaction(async (tx) => {
		await readings.seedDocument(tx, report.readings.document, seedReadings(session));
		if (team.name !== aheadOfAll) return;
		for (const section of report.sections) {
			const text = drafts[slug][section.key];
			if (text) await readings.seedDocument(tx, section.document, seedSection(text));
		}
	});
}
