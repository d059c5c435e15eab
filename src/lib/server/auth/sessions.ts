import { and, eq, lt, ne, sql } from 'drizzle-orm';
import { Lucia, TimeSpan, type Adapter, type Cookie } from 'lucia';
import { database, schema, type Database, type Transaction } from '../db';
import { env } from '../env';
import { digestOf } from './secrets';
import type { Viewer } from './viewer';

declare module 'lucia' {
	interface Register {
		Lucia: Sessions;
		DatabaseUserAttributes: Omit<Viewer, 'id'>;
		DatabaseSessionAttributes: { client: string };
	}
}
type Sessions = Lucia<{ client: string }, Omit<Viewer, 'id'>>;

const { sessions, users } = schema;

/** A session that is not used for this long ends; use renews it. */
const lifetime = new TimeSpan(30, 'd');
/** Room in the list of one's sessions for what a browser says of itself. */
const clientLength = 200;

/** Sessions open for a person, as the live socket and `hooks` need them. */
export interface OpenSession {
	viewer: Viewer;
	/** SHA-256 of the cookie's secret: names this session without opening it */
	session: Uint8Array;
	/** set when the cookie's expiry moved and the browser should learn of it */
	cookie?: Cookie;
}

/** Rows hold the SHA-256 of what the cookie holds: whoever reads the table cannot sign in with it. */
function adapterOver(db: Database | Transaction): Adapter {
	return {
		async getSessionAndUser(secret) {
			const [row] = await db
				.select({ session: sessions, user: viewerColumns })
				.from(sessions)
				.innerJoin(users, eq(users.id, sessions.userId))
				.where(eq(sessions.tokenSha256, digestOf(secret)));
			if (!row) return [null, null];
			const { id, ...attributes } = row.user;
			return [
				{
					id: secret,
					userId: id,
					expiresAt: row.session.expiresAt,
					attributes: { client: row.session.client }
				},
				{ id, attributes: { ...attributes, theme: attributes.theme as Viewer['theme'] } }
			];
		},
		async getUserSessions(userId) {
			const rows = await db.select().from(sessions).where(eq(sessions.userId, userId));
			// The secrets are not known here: these ids are the digests, good for a list only.
			return rows.map((row) => ({
				id: Buffer.from(row.tokenSha256).toString('hex'),
				userId,
				expiresAt: row.expiresAt,
				attributes: { client: row.client }
			}));
		},
		async setSession(session) {
			await db.insert(sessions).values({
				tokenSha256: digestOf(session.id),
				userId: session.userId,
				expiresAt: session.expiresAt,
				client: session.attributes.client.slice(0, clientLength)
			});
		},
		async updateSessionExpiration(secret, expiresAt) {
			await db
				.update(sessions)
				.set({ expiresAt })
				.where(eq(sessions.tokenSha256, digestOf(secret)));
		},
		async deleteSession(secret) {
			await db.delete(sessions).where(eq(sessions.tokenSha256, digestOf(secret)));
		},
		async deleteUserSessions(userId) {
			await db.delete(sessions).where(eq(sessions.userId, userId));
		},
		async deleteExpiredSessions() {
			await db.delete(sessions).where(lt(sessions.expiresAt, sql`now()`));
		}
	};
}

const viewerColumns = {
	id: users.id,
	name: users.name,
	initials: users.initials,
	email: users.email,
	siteAdministrator: users.siteAdministrator,
	theme: users.theme
};

function luciaOver(db: Database | Transaction): Sessions {
	const secure = env().ORIGIN.startsWith('https:');
	return new Lucia(adapterOver(db), {
		sessionExpiresIn: lifetime,
		sessionCookie: {
			// The prefix makes browsers refuse a cookie of this name from anywhere but this origin over https.
			name: secure ? '__Host-meniscus' : 'meniscus',
			attributes: { secure, sameSite: 'lax', path: '/' }
		},
		getSessionAttributes: ({ client }) => ({ client }),
		getUserAttributes: (attributes) => attributes
	});
}

let shared: Sessions | undefined;
const lucia = (): Sessions => (shared ??= luciaOver(database()));

/**
 * Who holds the session named by a request's Cookie header; null when nobody does. Renews a session past half its life.
 * @param cookieHeader as the browser sent it
 */
export async function readSession(cookieHeader: string | null | undefined): Promise<OpenSession | null> {
	const secret = sessionSecret(cookieHeader);
	if (!secret) return null;
	const { session, user } = await lucia().validateSession(secret);
	if (!session) return null;
	return {
		viewer: user,
		session: digestOf(secret),
		...(session.fresh ? { cookie: lucia().createSessionCookie(secret) } : {})
	};
}

/** The session cookie's secret, whether or not it opens anything. */
export function sessionSecret(cookieHeader: string | null | undefined): string | null {
	return cookieHeader ? lucia().readSessionCookie(cookieHeader) : null;
}

/** Opens a session inside a verb's transaction and gives the cookie that holds it. */
export async function openSession(
	tx: Database | Transaction,
	userId: string,
	client: string
): Promise<Cookie> {
	const opened = await luciaOver(tx).createSession(userId, { client });
	return lucia().createSessionCookie(opened.id);
}

/** The cookie that takes the session out of a browser. */
export const blankCookie = (): Cookie => lucia().createBlankSessionCookie();

/**
 * Ends a person's sessions, all or all but one, and rings the doorbell at which live sockets look whether theirs still holds.
 * @param keep SHA-256 of the secret of the session that stays
 */
export async function endSessions(tx: Transaction, userId: string, keep?: Uint8Array | null): Promise<void> {
	await tx
		.delete(sessions)
		.where(and(eq(sessions.userId, userId), keep ? ne(sessions.tokenSha256, keep) : undefined));
	await ringRevoked(tx, userId);
}

/** Ends one session and rings. */
export async function endSession(tx: Transaction, userId: string, session: Uint8Array): Promise<void> {
	await tx.delete(sessions).where(and(eq(sessions.userId, userId), eq(sessions.tokenSha256, session)));
	await ringRevoked(tx, userId);
}

/** Channel of NOTIFY; the payload is the id of the person whose rights or sessions changed. */
export const revokeChannel = 'meniscus_revoke';

/** To be rung by every verb that takes something from a person: a session, a membership, a place in a team. */
export async function ringRevoked(tx: Transaction, userId: string): Promise<void> {
	await tx.execute(sql`select pg_notify(${revokeChannel}, ${userId})`);
}

/** True while the session is open: what a live socket asks after the doorbell and in its sweep. */
export async function sessionHolds(session: Uint8Array): Promise<boolean> {
	const [row] = await database()
		.select({ userId: sessions.userId })
		.from(sessions)
		.where(and(eq(sessions.tokenSha256, session), sql`${sessions.expiresAt} > now()`));
	return row !== undefined;
}
