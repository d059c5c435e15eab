import { fileURLToPath } from 'node:url';
import { eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import { seedReadings, seedSection } from '../../src/lib/collab';
import { shownResults } from '../../src/lib/reports';
import type { Viewer } from '../../src/lib/server/auth';
import * as courses from '../../src/lib/server/courses';
import { database, schema } from '../../src/lib/server/db';
import * as experiments from '../../src/lib/server/experiments';
import * as moderation from '../../src/lib/server/moderation';
import * as readings from '../../src/lib/server/readings';
import * as reports from '../../src/lib/server/reports';
import { engineVersion, evaluate, type Readings } from '../../src/lib/worksheets';
import { markReport } from './mark';
import { sections, teams, type DemoTeam } from './people';
import { insertCourse, type DemoCourse } from './people-in-database';
import { seededRandom, type SeededRandom } from './random';
import { simulateReadings } from './readings';
import { loadRotation } from './rotation';
import { writeReport, writeTeamSections } from './texts';

export { demoAccounts } from './accounts';

const zone = 'America/Halifax';
const seed = 310;
const hourMs = 3_600_000;
const dayMs = 24 * hourMs;
const template = fileURLToPath(new URL('../../templates/vaporization-of-water', import.meta.url));

/** How far each team has come. A number: so many of its authors have handed in; the rest write. */
const progress: Record<
	string,
	'returned' | 'marked' | 'in marking' | 'handed in' | 'draft' | 'nothing' | number
> = {
	Alder: 'returned',
	Birch: 'returned',
	Cedar: 'returned',
	Dogwood: 'returned',
	Elder: 'marked',
	Hazel: 'marked',
	Juniper: 'in marking',
	Larch: 'handed in',
	Linden: 'draft',
	Maple: 'handed in',
	Rowan: 2,
	Willow: 'nothing'
};
/** Hand in two hours after the due time. */
const lateAuthors = new Set(['Mateo Quispe', 'Dylan Pryce', 'Gideon Falk']);
const appeals = {
	author: 'Freya Nordahl',
	body: 'The budget in section 4 names its largest source. I ask you to look at this level again.'
};

/** Wall-clock time of the course, as the database keeps it. */
const local = (at: Date) =>
	new Intl.DateTimeFormat('sv-SE', { timeZone: zone, dateStyle: 'short', timeStyle: 'short' }).format(at);

interface Written {
	author: Viewer;
	team: DemoTeam;
	reportId: string;
	alias: string;
	quality: number;
	readings: Readings;
	snapshotId?: string;
}

async function setDates(assignmentId: string, due: Date, closes: Date): Promise<void> {
	await database()
		.update(schema.assignments)
		.set({ dueLocal: local(due), closesLocal: local(closes) })
		.where(eq(schema.assignments.id, assignmentId));
}

function person(course: DemoCourse, name: string): Viewer {
	const found = course.people.get(name);
	if (!found) throw new Error(`nobody called ${name}`);
	return found;
}

/** Readings and team sections once, then each author's own sections. */
async function write(
	random: SeededRandom,
	course: DemoCourse,
	team: DemoTeam,
	assignment: string
): Promise<Written[]> {
	const teamQuality = 2.2 + 1.2 * random.uniform();
	const simulated = simulateReadings(random);
	const shared = writeTeamSections(random, teamQuality);
	const written: Written[] = [];
	for (const name of team.students) {
		const author = person(course, name);
		const quality = Math.min(3.4, Math.max(1.2, teamQuality + 0.6 * random.normal()));
		const own = writeReport(random, quality);
		const { workId } = await courses.startWork({ viewer: author }, { assignment });
		const report = await reports.openReport(author, workId);
		await database().transaction(async (tx) => {
			await readings.seedDocument(tx, report.readings.document, seedReadings(simulated));
			for (const section of report.sections) {
				const text = section.owner === 'team' ? shared[section.key] : own[section.key];
				if (text) await readings.seedDocument(tx, section.document, seedSection(text));
			}
		});
		written.push({ author, team, reportId: report.id, alias: report.alias, quality, readings: simulated });
	}
	return written;
}

async function handIn(
	report: Written,
	worksheet: Awaited<ReturnType<typeof experiments.readTemplate>>
): Promise<void> {
	const results = shownResults(evaluate(worksheet, report.readings));
	const handed = await reports.handIn(
		{ viewer: report.author },
		{ report: report.reportId, engine: engineVersion, results }
	);
	report.snapshotId = handed.attempt.id;
}

/** Loads the invented course in every state a report can have. Times are those of loading. */
export async function loadDemo(say: (text: string) => void = (text) => console.log(text)): Promise<void> {
	const random = seededRandom(seed);
	const now = new Date();
	const worksheet = await experiments.readTemplate(template);
	say('people');
	const course = await insertCourse(zone);
	const published = await database().transaction((tx) => experiments.publish(tx, worksheet));
	const assignmentId = uuidv7();
	const dueTonight = new Date(now.getTime() + 2 * hourMs);
	const closes = new Date(now.getTime() + 2 * dayMs);
	await database()
		.insert(schema.assignments)
		.values({
			id: assignmentId,
			courseId: course.id,
			experimentVersionId: published.experimentVersionId,
			rubricVersionId: published.rubricVersionId,
			title: worksheet.title,
			position: 1,
			dueLocal: local(dueTonight),
			closesLocal: local(closes)
		});
	const instructor = person(course, 'Ruth Osei');
	// The Thursday section is at the bench a week later.
	const thursdayDue = new Date(now.getTime() + 3 * dayMs);
	for (const team of teams.filter((one) => one.section === 'Thursday')) {
		const teamId = course.teamIds.get(team.name);
		if (!teamId) continue;
		const dueLocal = `${local(thursdayDue).slice(0, 10)}T17:00`;
		const closesLocal = `${local(new Date(thursdayDue.getTime() + 2 * dayMs)).slice(0, 10)}T17:00`;
		const reason = 'Rotation: at the bench a week later';
		await courses.grantExtension(
			{ viewer: instructor },
			{ assignment: assignmentId, teamId, dueLocal, closesLocal, reason }
		);
	}
	const written: Written[] = [];
	for (const team of teams) {
		if (progress[team.name] === 'nothing') continue;
		say(`Team ${team.name} writes`);
		written.push(...(await write(random, course, team, assignmentId)));
	}
	say('hand-in');
	const handing = written.filter(({ author, team }) => {
		const step = progress[team.name];
		return step !== 'draft' && (typeof step !== 'number' || team.students.indexOf(author.name) < step);
	});
	await setDates(assignmentId, new Date(now.getTime() - 2 * hourMs), closes);
	for (const report of handing.filter(({ author }) => lateAuthors.has(author.name)))
		await handIn(report, worksheet);
	await setDates(assignmentId, dueTonight, closes);
	for (const report of handing.filter(({ author }) => !lateAuthors.has(author.name)))
		await handIn(report, worksheet);
	say('marking');
	for (const [index, report] of handing.entries()) {
		const step = progress[report.team.name];
		const graders = sections.find((section) => section.name === report.team.section)?.graders ?? [];
		const grader = person(course, graders[index % graders.length] ?? '');
		const toMark = {
			alias: report.alias,
			snapshotId: report.snapshotId ?? '',
			assignmentId,
			quality: report.quality
		};
		if (step === 'returned' || step === 'marked') await markReport(random, grader, toMark);
		if (step === 'in marking' && index % 2 === 0) await markReport(random, grader, toMark, 3);
	}
	say('returning');
	const back = handing.filter(({ team }) => progress[team.name] === 'returned');
	await moderation.returnReports(
		{ viewer: instructor },
		{ courseId: course.id, reports: back.map(({ reportId }) => reportId) }
	);
	const appealed = back.find(({ author }) => author.name === appeals.author);
	const [criterion] = (await experiments.rubricOf(database(), assignmentId)).criteria.slice(-1);
	if (appealed && criterion) {
		await database().insert(schema.appeals).values({
			reportId: appealed.reportId,
			criterionId: criterion.id,
			n: 1,
			action: 'ask',
			body: appeals.body,
			byId: appealed.author.id
		});
	}
	await loadRotation(course, { now, zone, instructor: instructor.id, say });
}
