import { ofCourse, type Answers, type Scene, type Stage } from './permission-table';

export interface PageRow {
	stage: Stage;
	params?: (scene: Scene) => Record<string, string>;
	answers: Answers;
}

/** Signed out: sent to the door. Signed in and not yours: not here. */
const closed = { nobody: 303, else: 404 } as const;
const open = { else: 200 } as const;
const course = (s: Scene) => ({ course: s.slug });
const work = (s: Scene) => ({ course: s.slug, work: s.workId });
const everyMember = ofCourse(closed, 200);
const instructorOnly = ofCourse(closed, 403, { instructor: 200 });
const gradersOnly = ofCourse(closed, 403, { grader: 200, otherGrader: 200 });
const own = { ...closed, student: 200, mate: 200 };
/** of one work: its team writes, staff of the course look on or are told that it is not theirs */
const ofWork = (staff: number) => ({
	stage: 'draft' as const,
	params: work,
	answers: { ...own, grader: staff, instructor: staff }
});

/** Route folder of every page -> who gets which answer. */
export const pageRows: Record<string, PageRow> = {
	'/': { stage: 'draft', answers: { else: 303 } },
	'/(desk)/now': { stage: 'draft', answers: { nobody: 303, else: 200 } },
	'/(desk)/account': { stage: 'draft', answers: { nobody: 303, else: 200 } },
	'/(desk)/c/[course]': { stage: 'draft', params: course, answers: everyMember },
	'/(desk)/c/[course]/settings/[part]': {
		stage: 'draft',
		params: (s) => ({ course: s.slug, part: 'people' }),
		answers: instructorOnly
	},
	'/(desk)/c/[course]/returning': { stage: 'marked', params: course, answers: instructorOnly },
	'/(desk)/c/[course]/spread': { stage: 'marked', params: course, answers: instructorOnly },
	'/(desk)/c/[course]/sitting': { stage: 'handed in', params: course, answers: gradersOnly },
	'/(desk)/c/[course]/sitting/[alias]/[sheet]': {
		stage: 'handed in',
		params: (s) => ({ course: s.slug, alias: s.alias, sheet: 'report' }),
		// An alias tells nobody but the grader anything, not even whether it is one.
		answers: { ...closed, grader: 200 }
	},
	'/(desk)/c/[course]/w/[work]/bench': ofWork(200),
	'/(desk)/c/[course]/w/[work]/workings': ofWork(200),
	'/(desk)/c/[course]/w/[work]/report': ofWork(403),
	'/(desk)/c/[course]/w/[work]/hand-in': ofWork(403),
	'/(desk)/c/[course]/w/[work]/returned': {
		stage: 'returned',
		params: work,
		answers: { ...own, grader: 403, instructor: 403 }
	},
	'/(desk)/site/[part]': {
		stage: 'draft',
		params: () => ({ part: 'accounts' }),
		answers: { ...closed, administrator: 200 }
	},
	// Whoever is in already is sent to the desk.
	'/(door)/sign-in': { stage: 'draft', answers: { nobody: 200, else: 303 } },
	'/(door)/sign-out': { stage: 'draft', answers: { nobody: 303, else: 200 } },
	'/(door)/join/[[words]]': {
		stage: 'draft',
		params: () => ({ words: 'no-such-words-here' }),
		answers: open
	},
	// Made-up links: what they open is told by the page, alike for everyone.
	'/(door)/invitation/[token]': {
		stage: 'draft',
		params: () => ({ token: 'x'.repeat(32) }),
		answers: { else: 404 }
	},
	'/(door)/verify/[token]': {
		stage: 'draft',
		params: () => ({ token: 'x'.repeat(32) }),
		answers: { else: 404 }
	},
	'/(door)/reset/[token]': {
		stage: 'draft',
		params: () => ({ token: 'x'.repeat(32) }),
		answers: { else: 404 }
	},
	'/(door)/reset': { stage: 'draft', answers: open }
};
