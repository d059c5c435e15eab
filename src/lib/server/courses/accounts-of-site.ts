import { sql } from 'drizzle-orm';
import { authorise, type Viewer } from '../auth';
import { database } from '../db';

export interface SiteAccount {
	id: string;
	name: string;
	email: string;
	verified: boolean;
	siteAdministrator: boolean;
	courses: number;
	createdAt: string;
}

/** Accounts of the site by e-mail, a page at a time: the cursor is the last address seen. For site administrators. */
export async function accountsOfSite(
	viewer: Viewer,
	page: { after?: string | undefined; limit: number }
): Promise<{ items: SiteAccount[]; next: string | null }> {
	const db = database();
	await authorise(db, viewer, 'site.manage', 'site');
	const rows = await db.execute<{
		id: string;
		name: string;
		email: string;
		verified: boolean;
		site_administrator: boolean;
		courses: number;
		created_at: string;
	}>(sql`
		select u.id, u.name, u.email, u.email_verified_at is not null as verified, u.site_administrator, u.created_at,
			(select count(distinct m.course_id)::int from members m where m.user_id = u.id and m.left_at is null) as courses
		from users u where u.email > ${page.after ?? ''} order by u.email limit ${page.limit + 1}`);
	const items = rows.slice(0, page.limit).map((row) => ({
		id: row.id,
		name: row.name,
		email: row.email,
		verified: row.verified,
		siteAdministrator: row.site_administrator,
		courses: row.courses,
		createdAt: new Date(row.created_at).toISOString()
	}));
	return { items, next: rows.length > page.limit ? (items.at(-1)?.email ?? null) : null };
}
