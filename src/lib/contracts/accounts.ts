import { z } from 'zod';
import { slug } from './courses';
import { operation } from './operation';
import { instant, line, uuid } from './shapes';

/** Trimmed and in lower case, so that one address is one account. */
export const email = z
	.string()
	.trim()
	.toLowerCase()
	.max(254, 'Longer than an e-mail address can be.')
	.pipe(z.email('This is not an e-mail address: name@place.example.'));
export const personName = line.min(1, 'Type the name others will read.').max(120, 'At most 120 characters.');
export const initials = z
	.string()
	.trim()
	.regex(/^[\p{L}\p{N}.-]{1,5}$/u, 'One to five letters, as written beside a reading.');
/** Length and guessability are ruled by the verb; here only what could be a password at all. */
export const password = z.string().min(1, 'Type a password.').max(1024, 'At most 256 characters.');
export const theme = z.enum(['system', 'light', 'dark']);
export const courseRole = z.enum(['student', 'grader', 'instructor']);

const course = z.object({ course: slug });

export const health = operation({
	id: 'health',
	method: 'GET',
	path: '/health',
	summary: 'Whether this process answers and reaches its database',
	access: 'anyone',
	response: z.object({ state: z.literal('well'), databaseMs: z.number().nonnegative() })
});

export const openApi = operation({
	id: 'openApi',
	method: 'GET',
	path: '/openapi.json',
	summary: 'This description, OpenAPI 3.1',
	access: 'anyone',
	media: 'application/json'
});

export const profile = z.object({
	id: uuid,
	name: z.string(),
	initials: z.string(),
	email: z.string(),
	theme,
	siteAdministrator: z.boolean()
});

export const readProfile = operation({
	id: 'readProfile',
	method: 'GET',
	path: '/account',
	summary: 'The person signed in',
	access: 'signed-in',
	response: profile
});

export const profileChange = z.object({
	name: personName.optional(),
	initials: initials.optional(),
	theme: theme.optional()
});
export const changeProfile = operation({
	id: 'changeProfile',
	method: 'PATCH',
	path: '/account',
	summary: 'Change name, initials or theme',
	access: 'signed-in',
	body: profileChange,
	response: profile
});

export const session = z.object({
	/** names the session without opening it */
	id: z.string(),
	/** what the browser said of itself */
	client: z.string(),
	startedAt: instant,
	expiresAt: instant,
	/** the session that asks */
	current: z.boolean()
});
export const listSessions = operation({
	id: 'listSessions',
	method: 'GET',
	path: '/account/sessions',
	summary: 'Where this person is signed in',
	access: 'signed-in',
	response: z.object({ items: z.array(session) })
});

export const signOutEverywhere = operation({
	id: 'signOutEverywhere',
	method: 'DELETE',
	path: '/account/sessions',
	summary: 'End every session of this person, this one included',
	access: 'signed-in'
});

export const invitationBody = z.object({
	email,
	role: courseRole,
	labSectionId: uuid.optional(),
	name: personName.optional()
});
export const invite = operation({
	id: 'invite',
	method: 'POST',
	path: '/courses/{course}/invitations',
	summary: 'Mail somebody a link into the course',
	access: 'signed-in',
	params: course,
	body: invitationBody,
	response: z.object({ email: z.string(), role: courseRole, expiresAt: instant }),
	status: 201,
	repeatable: true
});

export const benchWords = z.object({
	labSectionId: uuid,
	labSection: z.string(),
	/** four words joined by hyphens */
	words: z.string(),
	/** page that joins with them */
	path: z.string(),
	expiresAt: instant
});
export const listBenchWords = operation({
	id: 'listBenchWords',
	method: 'GET',
	path: '/courses/{course}/bench-words',
	summary: 'The words that let people join now, by lab section',
	access: 'signed-in',
	params: course,
	response: z.object({ items: z.array(benchWords) })
});
export const makeBenchWords = operation({
	id: 'makeBenchWords',
	method: 'POST',
	path: '/courses/{course}/bench-words',
	summary: 'Draw new words for a lab section; earlier ones stop working',
	access: 'signed-in',
	params: course,
	body: z.object({ labSectionId: uuid }),
	response: benchWords,
	status: 201,
	repeatable: true
});

export const joinByWords = operation({
	id: 'joinByWords',
	method: 'POST',
	path: '/account/memberships',
	summary: 'Join a lab section with its bench words',
	access: 'signed-in',
	body: z.object({ words: z.string().max(200) }),
	response: z.object({ courseId: uuid, slug: z.string(), labSection: z.string() }),
	status: 201,
	repeatable: true
});
