import { DateFormatter } from '@internationalized/date';
import type { Viewer } from '../auth';
import { staffLines, type StaffLine } from './staff-lines';
import { studentLines, type StudentLine } from './student-lines';

export interface Now {
	/** what is due, in one sentence */
	sentence: string;
	next: { label: string; href: string } | null;
	/** seven days from today, in the first course's zone */
	days: {
		date: string;
		weekday: string;
		day: string;
		today: boolean;
		due: { title: string; time: string; href: string; settled: boolean }[];
	}[];
	student: StudentLine[];
	grader: StaffLine[];
	instructor: StaffLine[];
}

const dayMs = 86_400_000;
const utc = 'UTC';

/** "Friday 17:00"; beyond a week "Friday 11 December 17:00". */
export function sayWhen(at: Date, now: Date, zone: string): string {
	const near = Math.abs(at.getTime() - now.getTime()) < 6 * dayMs;
	const day = new DateFormatter(
		'en-GB',
		near
			? { weekday: 'long', timeZone: zone }
			: { weekday: 'long', day: 'numeric', month: 'long', timeZone: zone }
	);
	const time = new DateFormatter('en-GB', { hour: '2-digit', minute: '2-digit', timeZone: zone });
	return `${day.format(at)} ${time.format(at)}`;
}

const dateIn = (at: Date, zone: string) =>
	new DateFormatter('en-CA', { year: 'numeric', month: '2-digit', day: '2-digit', timeZone: zone }).format(
		at
	);

export const workHref = (line: StudentLine) => {
	const base = `/c/${line.course.slug}`;
	if (!line.workId) return base;
	const leaf = line.custody === 'returned' ? 'returned' : line.custody === 'marker' ? 'hand-in' : 'report';
	return `${base}/w/${line.workId}/${leaf}`;
};

function week(lines: StudentLine[], now: Date): Now['days'] {
	const zone = lines[0]?.course.zone ?? utc;
	return Array.from({ length: 7 }, (_, offset) => {
		const at = new Date(now.getTime() + offset * dayMs);
		const date = dateIn(at, zone);
		const due = lines
			.filter((line) => dateIn(line.dueAt, line.course.zone) === date)
			.map((line) => ({
				title: line.title,
				time: new DateFormatter('en-GB', {
					hour: '2-digit',
					minute: '2-digit',
					timeZone: line.course.zone
				}).format(line.dueAt),
				href: workHref(line),
				settled: line.handedInAt !== null
			}));
		return {
			date,
			weekday: new DateFormatter('en-GB', { weekday: 'short', timeZone: zone }).format(at),
			day: new DateFormatter('en-GB', { day: 'numeric', timeZone: zone }).format(at),
			today: offset === 0,
			due
		};
	});
}

const count = (n: number, one: string, many: string) => `${n} ${n === 1 ? one : many}`;

function studentNext(lines: StudentLine[], now: Date): Pick<Now, 'sentence' | 'next'> | null {
	const unmet = lines.find((line) => line.custody === 'team');
	if (unmet) {
		const when = sayWhen(unmet.dueAt, now, unmet.course.zone);
		const late = unmet.dueAt < now;
		return {
			sentence: late
				? `${unmet.title} was due ${when}. Hand-in closes ${sayWhen(unmet.closesAt, now, unmet.course.zone)}.`
				: `${unmet.title} is due ${when}.`,
			next: { label: 'Continue', href: workHref(unmet) }
		};
	}
	const returned = lines.filter((line) => line.custody === 'returned').at(-1);
	if (returned)
		return {
			sentence: `Nothing due. ${returned.title} is back with you.`,
			next: { label: 'Read the remarks', href: workHref(returned) }
		};
	return null;
}

/** What the desk shows first: the earliest unmet due, the next report to mark, the reports ready to return. */
export async function now(viewer: Viewer, at: Date): Promise<Now> {
	const [student, grader, instructor] = await Promise.all([
		studentLines(viewer, at),
		staffLines(viewer, 'grader'),
		staffLines(viewer, 'instructor')
	]);
	const days = week(student, at);
	const toMark = grader.reduce((sum, line) => sum + line.toMark, 0);
	const firstToMark = grader.find((line) => line.toMark > 0);
	const toReturn = instructor.reduce((sum, line) => sum + line.toReturn, 0);
	const firstToReturn = instructor.find((line) => line.toReturn > 0);
	const shared = { days, student, grader, instructor };
	const fromStudent = studentNext(student, at);
	if (fromStudent) return { ...shared, ...fromStudent };
	if (firstToMark) {
		return {
			...shared,
			sentence: `${count(toMark, 'report waits', 'reports wait')} for you to mark.`,
			next: { label: 'Continue', href: `/c/${firstToMark.course.slug}/sitting` }
		};
	}
	if (firstToReturn) {
		return {
			...shared,
			sentence: `${count(toReturn, 'report is', 'reports are')} marked and ready to return.`,
			next: { label: 'Continue', href: `/c/${firstToReturn.course.slug}/returning` }
		};
	}
	const empty = student.length + grader.length + instructor.length === 0;
	if (empty && viewer.siteAdministrator) {
		return {
			...shared,
			sentence: 'You are in no course. The accounts and courses of this site are yours to look after.',
			next: { label: 'Open the site', href: '/site/accounts' }
		};
	}
	return {
		...shared,
		sentence: empty
			? 'You are in no course yet. Ask for the bench words of your lab section, or for an invitation.'
			: 'Nothing waits for you.',
		next: null
	};
}
