import { z } from 'zod';
import { operation } from './operation';
import { instant, line, page, pageQuery, uuid, wallClock } from './shapes';

export const slug = z.string().regex(/^[a-z0-9][a-z0-9-]{0,62}$/);
const courseParams = z.object({ course: slug });
const role = z.enum(['student', 'grader', 'instructor']);

export const courseHead = z.object({
	id: uuid,
	slug,
	code: z.string(),
	title: z.string(),
	institution: z.string(),
	zone: z.string(),
	roles: z.array(role)
});

export const rotationRow = z.object({
	assignmentId: uuid,
	title: z.string(),
	experiment: z.string(),
	dueLocal: z.string(),
	closesLocal: z.string(),
	workId: uuid.nullable(),
	team: z.string().nullable()
});

export const listCourses = operation({
	id: 'listCourses',
	method: 'GET',
	path: '/courses',
	summary: 'Courses the person belongs to',
	access: 'signed-in',
	response: z.object({ items: z.array(z.object({ slug, code: z.string(), title: z.string() })) })
});

export const readCourse = operation({
	id: 'readCourse',
	method: 'GET',
	path: '/courses/{course}',
	summary: 'A course and its rotation',
	access: 'signed-in',
	params: courseParams,
	response: courseHead.extend({ rotation: z.array(rotationRow) })
});

export const listPeople = operation({
	id: 'listPeople',
	method: 'GET',
	path: '/courses/{course}/people',
	summary: 'Members of a course, by name',
	access: 'signed-in',
	params: courseParams,
	query: pageQuery.extend({ role: role.optional() }),
	response: page(
		z.object({
			userId: uuid,
			name: z.string(),
			email: z.string(),
			role,
			labSection: z.string().nullable(),
			team: z.string().nullable(),
			joinedAt: instant
		})
	)
});

export const startWork = operation({
	id: 'startWork',
	method: 'POST',
	path: '/assignments/{assignment}/work',
	summary: "Opens the work of the person's team on an assignment; the same work when repeated",
	access: 'signed-in',
	params: z.object({ assignment: uuid }),
	response: z.object({ workId: uuid }),
	repeatable: true
});

export const changeDates = operation({
	id: 'changeDates',
	method: 'PATCH',
	path: '/assignments/{assignment}/dates',
	summary: "Sets when reports are due and when hand-in closes, in the course's zone",
	access: 'signed-in',
	params: z.object({ assignment: uuid }),
	body: z.object({ dueLocal: wallClock, closesLocal: wallClock }),
	response: z.object({ dueLocal: z.string(), closesLocal: z.string() }),
	repeatable: true
});

export const grantExtension = operation({
	id: 'grantExtension',
	method: 'POST',
	path: '/assignments/{assignment}/extensions',
	summary: 'Gives one person or one team more time; replaces an earlier one',
	access: 'signed-in',
	params: z.object({ assignment: uuid }),
	body: z.object({
		userId: uuid.optional(),
		teamId: uuid.optional(),
		dueLocal: wallClock,
		closesLocal: wallClock,
		reason: z.string().trim().min(1).max(500)
	}),
	response: z.object({ id: uuid }),
	repeatable: true
});

export const placeInTeam = operation({
	id: 'placeInTeam',
	method: 'PUT',
	path: '/courses/{course}/people/{user}/team',
	summary: 'Puts a student on a team from now on; an earlier team keeps what was written',
	access: 'signed-in',
	params: courseParams.extend({ user: uuid }),
	body: z.object({ teamId: uuid.nullable() }),
	response: z.object({ teamId: uuid.nullable() }),
	repeatable: true
});

export const addTeam = operation({
	id: 'addTeam',
	method: 'POST',
	path: '/courses/{course}/teams',
	summary: 'Adds a team to a lab section',
	access: 'signed-in',
	params: courseParams,
	body: z.object({ labSectionId: uuid, name: line.min(1).max(60) }),
	response: z.object({ id: uuid }),
	status: 201,
	repeatable: true
});

export const addCourse = operation({
	id: 'addCourse',
	method: 'POST',
	path: '/courses',
	summary: 'Opens a course; its first instructor is invited apart',
	access: 'signed-in',
	body: z.object({
		slug: slug.describe('Stands in addresses'),
		code: line.min(1, 'Type the code people call it by.').max(40),
		title: line.min(1, 'Type the title.').max(160),
		institution: line.min(1, 'Type the institution.').max(160),
		zone: line.min(1).max(80)
	}),
	response: z.object({ id: uuid, slug }),
	status: 201,
	repeatable: true
});

export const addLabSection = operation({
	id: 'addLabSection',
	method: 'POST',
	path: '/courses/{course}/lab-sections',
	summary: 'Adds a lab section to a course',
	access: 'signed-in',
	params: courseParams,
	body: z.object({
		name: line.min(1, 'Type a name.').max(60),
		meets: line.min(1, 'Say when it meets.').max(120)
	}),
	response: z.object({ id: uuid }),
	status: 201,
	repeatable: true
});

export const addAssignment = operation({
	id: 'addAssignment',
	method: 'POST',
	path: '/courses/{course}/assignments',
	summary: "Sets an experiment in a course, with its dates in the course's zone",
	access: 'signed-in',
	params: courseParams,
	body: z.object({
		experiment: z.string().regex(/^[a-z0-9-]{1,80}$/, 'Choose an experiment.'),
		dueLocal: wallClock,
		closesLocal: wallClock,
		hideNames: z.boolean().default(true)
	}),
	response: z.object({ id: uuid, title: z.string() }),
	status: 201,
	repeatable: true
});

export const listAccounts = operation({
	id: 'listAccounts',
	method: 'GET',
	path: '/accounts',
	summary: 'Accounts of the site, by e-mail',
	access: 'signed-in',
	query: pageQuery,
	response: page(
		z.object({
			id: uuid,
			name: z.string(),
			email: z.string(),
			verified: z.boolean(),
			siteAdministrator: z.boolean(),
			courses: z.number().int(),
			createdAt: instant
		})
	)
});
