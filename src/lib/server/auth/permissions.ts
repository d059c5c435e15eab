import { sql, type SQL } from 'drizzle-orm';
import type { Database, Transaction } from '../db';
import { forbidden, notFound } from '../errors';
import { hasRole, relations, scopes, type Relation, type Role, type Thing } from './relations';
import type { Viewer } from './viewer';

type Allow = Partial<Record<Role, readonly Relation[]>>;

/**
 * The one table of who may do what: action -> thing, and for each role the relations any of which allows it.
 * An action named `<thing>.see` also decides whether a refusal says "not allowed" or "not here".
 */
export const permissions = {
	'site.manage': { thing: 'site', allow: { administrator: ['course'] } },

	'course.see': {
		thing: 'course',
		// An administrator opens courses and names their first instructor; reports and marks are not an administrator's.
		allow: { student: ['course'], grader: ['course'], instructor: ['course'], administrator: ['course'] }
	},
	'course.change': { thing: 'course', allow: { instructor: ['course'] } },
	'course.invite': { thing: 'course', allow: { instructor: ['course'], administrator: ['course'] } },
	'course.mark': { thing: 'course', allow: { grader: ['course'] } },
	'course.return': { thing: 'course', allow: { instructor: ['course'] } },
	'course.spread': { thing: 'course', allow: { instructor: ['course'] } },
	'course.record': { thing: 'course', allow: { instructor: ['course'] } },

	'assignment.see': {
		thing: 'assignment',
		allow: { student: ['course'], grader: ['course'], instructor: ['course'] }
	},
	'assignment.change': { thing: 'assignment', allow: { instructor: ['course'] } },
	'assignment.mark': { thing: 'assignment', allow: { grader: ['course'] } },
	'assignment.spread': { thing: 'assignment', allow: { instructor: ['course'] } },

	'work.see': { thing: 'work', allow: { student: ['team'], grader: ['section'], instructor: ['course'] } },
	'work.write': { thing: 'work', allow: { student: ['team'] } },

	'document.see': {
		thing: 'document',
		allow: { student: ['owner'], grader: ['readings'], instructor: ['course'] }
	},
	'document.write': { thing: 'document', allow: { student: ['owner'] } },

	'report.see': {
		thing: 'report',
		allow: { student: ['author'], grader: ['handedIn'], instructor: ['course'] }
	},
	'report.handIn': { thing: 'report', allow: { student: ['author'] } },
	'report.mark': { thing: 'report', allow: { grader: ['handedIn'] } },
	'report.readMarks': { thing: 'report', allow: { student: ['returned'], instructor: ['course'] } },
	'report.return': { thing: 'report', allow: { instructor: ['course'] } },

	'snapshot.see': {
		thing: 'snapshot',
		allow: { student: ['author'], grader: ['section'], instructor: ['course'] }
	},

	'marking.see': {
		thing: 'marking',
		allow: { student: ['returned'], grader: ['marker'], instructor: ['course'] }
	},
	'marking.change': { thing: 'marking', allow: { grader: ['marker'] } },

	'remark.see': {
		thing: 'remark',
		allow: { student: ['returned'], grader: ['marker'], instructor: ['course'] }
	},
	'remark.change': { thing: 'remark', allow: { grader: ['marker'] } },
	'remark.reply': { thing: 'remark', allow: { student: ['returned'] } },

	'file.see': { thing: 'file', allow: { student: ['team'], grader: ['section'], instructor: ['course'] } }
} as const satisfies Record<string, { thing: Thing; allow: Allow }>;

export type Action = keyof typeof permissions;

/**
 * SQL predicate: may `viewer` do `action` to the thing whose id is `id` (a value, or a column of an outer query)?
 * Roles and relations of one action are alternatives.
 */
export function allowed(action: Action, viewer: string, id: string | SQL): SQL<boolean> {
	const { thing, allow } = permissions[action] as { thing: Thing; allow: Allow };
	const scope = scopes[thing];
	const cases = (Object.entries(allow) as [Role, readonly Relation[]][]).flatMap(([role, names]) =>
		names.map((name) => sql`(${hasRole(role, viewer, scope.course)} and ${relations[name](viewer)})`)
	);
	return sql<boolean>`exists (select 1 from ${scope.from} where ${scope.id} = ${id} and (${sql.join(cases, sql` or `)}))`;
}

/** The answer without consequences, for presenters that offer or hide an act. */
export async function may(
	db: Database | Transaction,
	viewer: Viewer,
	action: Action,
	id: string
): Promise<boolean> {
	const [row] = await db.execute<{ allowed: boolean }>(
		sql`select ${allowed(action, viewer.id, id)} as allowed`
	);
	return row?.allowed === true;
}

/**
 * Throws unless `viewer` may do `action` to the thing. What may not be seen is "not found"; what may be seen but not
 * done is "forbidden".
 */
export async function authorise(
	db: Database | Transaction,
	viewer: Viewer,
	action: Action,
	id: string
): Promise<void> {
	const see = `${permissions[action].thing}.see` as Action;
	const visible = see in permissions ? allowed(see, viewer.id, id) : sql<boolean>`false`;
	const [row] = await db.execute<{ allowed: boolean; visible: boolean }>(
		sql`select ${allowed(action, viewer.id, id)} as allowed, ${visible} as visible`
	);
	if (row?.allowed) return;
	throw row?.visible ? forbidden() : notFound();
}
