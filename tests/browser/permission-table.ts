import { v7 as uuidv7 } from 'uuid';
import type { MadeCourse } from '../factories';

/** Everyone who may knock. */
export const personas = [
	/** not signed in */
	'nobody',
	/** signed in, in no course */
	'stranger',
	/** wrote the report */
	'student',
	/** on the same team */
	'mate',
	/** student of another lab section */
	'otherStudent',
	/** marks the student's lab section */
	'grader',
	/** marks another lab section */
	'otherGrader',
	'instructor',
	/** of the site, in no course */
	'administrator'
] as const;
export type Persona = (typeof personas)[number];

/** How far the student's report has come before the request. */
export type Stage = 'draft' | 'handed in' | 'marked' | 'returned';

export interface Scene extends MadeCourse {
	report: string;
	alias: string;
	snapshot: string;
	marking: string;
	revision: number;
	remark: string;
	criterion: string;
	sitting: string;
	kept: string;
	file: string;
	/** document of the team's readings */
	readings: string;
	/** document of the author's abstract */
	abstract: string;
	results: unknown;
	engine: string;
}

export interface Row {
	stage: Stage;
	/** parameters of the address; body; headers */
	call?: (scene: Scene) => {
		params?: Record<string, string>;
		query?: Record<string, string>;
		body?: unknown;
		/** raw bytes with their type instead of JSON */
		raw?: { type: string; text: string };
		revision?: number;
	};
	answers: Answers;
}
/** Status for each persona; `else` for those not named. */
export type Answers = Partial<Record<Persona, number>> & { else: number };

/**
 * The same answer for everyone who sees that there is a course, but for those named in `over`. The administrator is one of
 * them: somebody has to invite the first people into it.
 */
export const ofCourse = (
	closed: Answers,
	status: number,
	over: Partial<Record<Persona, number>> = {}
): Answers => ({
	...closed,
	student: status,
	mate: status,
	otherStudent: status,
	grader: status,
	otherGrader: status,
	instructor: status,
	administrator: status,
	...over
});

/** Not signed in is always said as such; nothing is told of what is there. */
const closed = { nobody: 401, else: 404 } as const;
const members = ofCourse(closed, 200);
/** members see the course, so that they are told "not yours"; everyone else that it is not there */
const instructorOnly = (status = 200) => ofCourse(closed, 403, { instructor: status });
const gradersOnly = ofCourse(closed, 403, { grader: 200, otherGrader: 200 });
/** inviting is an administrator's too: somebody has to name the first instructor */
const inviters = (status = 200) => ({ ...instructorOnly(status), administrator: status });
/** by report: only its author and the section's grader know that it is there */
const ofReport = { ...closed, student: 403, grader: 403, instructor: 200 };
const signedIn = (status = 200) => ({ nobody: 401, else: status });
const later = { dueLocal: '2030-01-04T17:00', closesLocal: '2030-01-06T17:00' };
const anchor = {
	section: 1,
	selectors: [{ type: 'TextPositionSelector', start: 0, end: 3 }],
	links: [],
	projection: 1
};

/** METHOD address of the API -> who gets which answer. */
export const apiRows: Record<string, Row> = {
	'GET /health': { stage: 'draft', answers: { else: 200 } },
	'GET /openapi.json': { stage: 'draft', answers: { else: 200 } },

	'GET /account': { stage: 'draft', answers: signedIn() },
	'PATCH /account': { stage: 'draft', call: () => ({ body: { theme: 'system' } }), answers: signedIn() },
	'GET /account/sessions': { stage: 'draft', answers: signedIn() },
	'DELETE /account/sessions': { stage: 'draft', answers: signedIn(204) },
	'POST /account/memberships': {
		stage: 'draft',
		call: () => ({ body: { words: 'no-such-words-here' } }),
		// words that open nothing are told apart from nothing else
		answers: signedIn(422)
	},

	'GET /accounts': { stage: 'draft', answers: { ...closed, administrator: 200 } },
	'POST /courses': {
		stage: 'draft',
		call: (s) => ({
			body: {
				slug: `${s.slug}-b`,
				code: 'PC 320',
				title: 'Second course',
				institution: 'Harrow Point College',
				zone: 'America/Halifax'
			}
		}),
		answers: { ...closed, administrator: 201 }
	},
	'GET /courses': { stage: 'draft', answers: signedIn() },
	'GET /courses/{course}': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug } }),
		answers: members
	},
	'GET /courses/{course}/people': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug } }),
		answers: inviters()
	},
	'POST /courses/{course}/invitations': {
		stage: 'draft',
		call: (s) => ({
			params: { course: s.slug },
			body: { email: 'new@harrow-point.example', role: 'student', labSectionId: s.labSectionId }
		}),
		answers: inviters(201)
	},
	'GET /courses/{course}/bench-words': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug } }),
		answers: inviters()
	},
	'POST /courses/{course}/bench-words': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug }, body: { labSectionId: s.labSectionId } }),
		answers: inviters(201)
	},
	'POST /courses/{course}/lab-sections': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug }, body: { name: 'Friday', meets: 'Friday 9:00' } }),
		answers: instructorOnly(201)
	},
	'POST /courses/{course}/assignments': {
		stage: 'draft',
		call: (s) => ({
			params: { course: s.slug },
			body: { experiment: 'vaporization-of-water', ...later, hideNames: true }
		}),
		answers: instructorOnly(201)
	},
	'POST /courses/{course}/teams': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug }, body: { labSectionId: s.labSectionId, name: 'Yew' } }),
		answers: instructorOnly(201)
	},
	'PUT /courses/{course}/people/{user}/team': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug, user: s.otherStudent.id }, body: { teamId: s.teamId } }),
		answers: instructorOnly()
	},
	'POST /assignments/{assignment}/work': {
		stage: 'draft',
		call: (s) => ({ params: { assignment: s.assignmentId } }),
		// Staff see the assignment; being on no team is what stands in their way.
		answers: {
			...closed,
			student: 200,
			mate: 200,
			otherStudent: 200,
			grader: 409,
			otherGrader: 409,
			instructor: 409
		}
	},
	'PATCH /assignments/{assignment}/dates': {
		stage: 'draft',
		call: (s) => ({ params: { assignment: s.assignmentId }, body: later }),
		answers: { ...instructorOnly(), administrator: 404 }
	},
	'POST /assignments/{assignment}/extensions': {
		stage: 'draft',
		call: (s) => ({
			params: { assignment: s.assignmentId },
			body: { ...later, teamId: s.teamId, reason: 'illness' }
		}),
		answers: { ...instructorOnly(), administrator: 404 }
	},

	'GET /works/{work}/readings': {
		stage: 'draft',
		call: (s) => ({ params: { work: s.workId } }),
		answers: { ...closed, student: 200, mate: 200, grader: 200, instructor: 200 }
	},
	'GET /works/{work}/evaluation': {
		stage: 'draft',
		call: (s) => ({ params: { work: s.workId } }),
		answers: { ...closed, student: 200, mate: 200, grader: 200, instructor: 200 }
	},
	'GET /works/{work}/files': {
		stage: 'draft',
		call: (s) => ({ params: { work: s.workId } }),
		answers: { ...closed, student: 200, mate: 200, grader: 200, instructor: 200 }
	},
	'PUT /works/{work}/readings/{table}/file': {
		stage: 'draft',
		call: (s) => ({
			params: { work: s.workId, table: 'readings' },
			query: { name: 'run.csv' },
			raw: { type: 'text/csv', text: 't,p\n83.02,400.1\n' }
		}),
		answers: { ...closed, student: 200, mate: 200, grader: 403, instructor: 403 }
	},
	'GET /files/{file}': {
		stage: 'draft',
		call: (s) => ({ params: { file: s.file } }),
		answers: { ...closed, student: 200, mate: 200, grader: 200, instructor: 200 }
	},
	// The author's own abstract: not even the team mate's, and a grader sees no draft.
	'GET /documents/{document}': {
		stage: 'draft',
		call: (s) => ({ params: { document: s.abstract } }),
		answers: { ...closed, student: 200, instructor: 200 }
	},
	'GET /documents/{document}/versions': {
		stage: 'draft',
		call: (s) => ({ params: { document: s.readings } }),
		answers: { ...closed, student: 200, mate: 200, grader: 200, instructor: 200 }
	},

	'PUT /works/{work}/report': {
		stage: 'draft',
		call: (s) => ({ params: { work: s.workId } }),
		answers: { ...closed, student: 200, mate: 200, grader: 403, instructor: 403 }
	},
	'GET /reports/{report}': {
		stage: 'draft',
		call: (s) => ({ params: { report: s.report } }),
		// A draft is its author's; the instructor may look, a grader may not before hand-in.
		answers: { ...closed, student: 200, instructor: 200 }
	},
	'POST /reports/{report}/hand-in': {
		stage: 'draft',
		call: (s) => ({ params: { report: s.report }, body: { engine: s.engine, results: s.results } }),
		answers: { ...closed, student: 201, instructor: 403 }
	},
	'GET /snapshots/{snapshot}': {
		stage: 'handed in',
		call: (s) => ({ params: { snapshot: s.snapshot } }),
		answers: { ...closed, student: 200, grader: 200, instructor: 200 }
	},

	'POST /sittings': {
		stage: 'handed in',
		call: (s) => ({ body: { assignment: s.assignmentId } }),
		answers: { ...gradersOnly, administrator: 404 }
	},
	'GET /sittings/{sitting}': {
		stage: 'handed in',
		call: (s) => ({ params: { sitting: s.sitting } }),
		answers: { ...closed, grader: 200 }
	},
	'POST /markings': {
		stage: 'handed in',
		call: (s) => ({ body: { alias: s.alias } }),
		answers: { ...closed, student: 403, grader: 200, instructor: 403 }
	},
	'GET /markings/{marking}': {
		stage: 'marked',
		call: (s) => ({ params: { marking: s.marking } }),
		answers: { ...closed, grader: 200, instructor: 200 }
	},
	'PUT /markings/{marking}/levels/{criterion}': {
		stage: 'handed in',
		call: (s) => ({
			params: { marking: s.marking, criterion: s.criterion },
			body: { level: 2 },
			revision: s.revision
		}),
		answers: { ...closed, grader: 200, instructor: 403 }
	},
	'PUT /markings/{marking}/remarks/{remark}': {
		stage: 'handed in',
		call: (s) => ({
			params: { marking: s.marking, remark: uuidv7() },
			body: { kind: 'note', body: 'Look again.', anchor },
			revision: s.revision
		}),
		answers: { ...closed, grader: 200, instructor: 403 }
	},
	'PATCH /remarks/{remark}': {
		stage: 'handed in',
		call: (s) => ({
			params: { remark: s.remark },
			body: { kind: 'note', body: 'Changed.' },
			revision: s.revision
		}),
		answers: { ...closed, grader: 200, instructor: 403 }
	},
	'DELETE /remarks/{remark}': {
		stage: 'handed in',
		call: (s) => ({ params: { remark: s.remark }, revision: s.revision }),
		answers: { ...closed, grader: 200, instructor: 403 }
	},
	'POST /markings/{marking}/finish': {
		stage: 'handed in',
		call: (s) => ({ params: { marking: s.marking }, revision: s.revision }),
		// 422: the scene's marking lacks levels; whoever may not finish is not told so.
		answers: { ...closed, grader: 422, instructor: 403 }
	},
	'POST /markings/{marking}/reopen': {
		stage: 'marked',
		call: (s) => ({ params: { marking: s.marking }, revision: s.revision }),
		answers: { ...closed, grader: 200, instructor: 403 }
	},
	'GET /courses/{course}/kept-remarks': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug } }),
		answers: gradersOnly
	},
	'POST /courses/{course}/kept-remarks': {
		stage: 'draft',
		call: (s) => ({ params: { course: s.slug }, body: { kind: 'note', body: 'Name the source.' } }),
		answers: gradersOnly
	},
	'POST /kept-remarks/{kept}/uses': {
		stage: 'draft',
		call: (s) => ({ params: { kept: s.kept } }),
		answers: { ...closed, grader: 200 }
	},
	'DELETE /kept-remarks/{kept}': {
		stage: 'draft',
		call: (s) => ({ params: { kept: s.kept } }),
		answers: { ...closed, grader: 204 }
	},
	'PUT /remarks/{remark}/replies/{reply}': {
		stage: 'returned',
		call: (s) => ({ params: { remark: s.remark, reply: uuidv7() }, body: { body: 'Thank you.' } }),
		answers: { ...closed, student: 200, grader: 403, instructor: 403 }
	},

	'GET /returning/{course}': {
		stage: 'marked',
		call: (s) => ({ params: { course: s.slug } }),
		answers: instructorOnly()
	},
	'POST /returning/{course}': {
		stage: 'marked',
		call: (s) => ({ params: { course: s.slug }, body: { reports: [s.report] } }),
		answers: ofReport
	},
	'POST /returning/{course}/withdrawals': {
		stage: 'returned',
		call: (s) => ({ params: { course: s.slug }, body: { reports: [s.report] } }),
		answers: ofReport
	},
	'GET /courses/{course}/spread': {
		stage: 'marked',
		call: (s) => ({ params: { course: s.slug }, query: { assignment: s.assignmentId } }),
		answers: instructorOnly()
	},
	'GET /courses/{course}/spread.csv': {
		stage: 'marked',
		call: (s) => ({ params: { course: s.slug }, query: { assignment: s.assignmentId } }),
		answers: instructorOnly()
	}
};
