import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { authorise, type Viewer } from '../auth';
import { database, mustBeStorable } from '../db';
import { unprocessable } from '../errors';

export interface Person {
	userId: string;
	name: string;
	email: string;
	role: 'student' | 'grader' | 'instructor';
	labSection: string | null;
	team: string | null;
	joinedAt: string;
}

const cursor = z.tuple([z.string(), z.guid(), z.enum(['student', 'grader', 'instructor'])]);

interface Cursor {
	name: string;
	userId: string;
	role: string;
}

function readCursor(after: string | undefined): Cursor | null {
	if (!after) return null;
	try {
		const [name, userId, role] = cursor.parse(JSON.parse(Buffer.from(after, 'base64url').toString('utf8')));
		mustBeStorable(name, 'after');
		return { name, userId, role };
	} catch {
		throw unprocessable('This cursor is not one of ours. Start from the first page.', {
			after: 'not a cursor'
		});
	}
}

/** Members of a course by name, a page at a time (keyset: name, id, role). For instructors. */
export async function people(
	viewer: Viewer,
	courseId: string,
	page: { after?: string | undefined; limit: number; role?: string | undefined }
): Promise<{ items: Person[]; next: string | null }> {
	const db = database();
	await authorise(db, viewer, 'course.invite', courseId);
	const from = readCursor(page.after);
	const rows = await db.execute<{
		user_id: string;
		name: string;
		email: string;
		role: Person['role'];
		lab_section: string | null;
		team: string | null;
		joined_at: string;
	}>(sql`
		select u.id as user_id, u.name, u.email, m.role, ls.name as lab_section, m.created_at as joined_at,
			(select t.name from team_members tm join teams t on t.id = tm.team_id
				where tm.course_id = m.course_id and tm.user_id = u.id and tm.during @> now()) as team
		from members m join users u on u.id = m.user_id left join lab_sections ls on ls.id = m.lab_section_id
		where m.course_id = ${courseId} and m.left_at is null
			${page.role ? sql`and m.role = ${page.role}` : sql``}
			${from ? sql`and (u.name, u.id, m.role) > (${from.name}, ${from.userId}::uuid, ${from.role})` : sql``}
		order by u.name, u.id, m.role
		limit ${page.limit + 1}`);
	const items = rows.slice(0, page.limit).map((row) => ({
		userId: row.user_id,
		name: row.name,
		email: row.email,
		role: row.role,
		labSection: row.lab_section,
		team: row.team,
		joinedAt: new Date(row.joined_at).toISOString()
	}));
	const last = items.at(-1);
	const next =
		rows.length > page.limit && last
			? Buffer.from(JSON.stringify([last.name, last.userId, last.role])).toString('base64url')
			: null;
	return { items, next };
}
