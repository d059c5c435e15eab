import { sql } from 'drizzle-orm';
import { boolean, check, index, integer, jsonb, pgTable, primaryKey, text, uuid } from 'drizzle-orm/pg-core';
import { bytes, createdAt, id, instant } from './columns';

export const users = pgTable(
	'users',
	{
		id: id(),
		/** Kept in lower case, so that one address is one account. */
		email: text('email').notNull().unique(),
		name: text('name').notNull(),
		initials: text('initials').notNull(),
		/** Argon2id, PHC string; null until the person has chosen one. */
		passwordHash: text('password_hash'),
		emailVerifiedAt: instant('email_verified_at'),
		siteAdministrator: boolean('site_administrator').notNull().default(false),
		theme: text('theme').notNull().default('system'),
		createdAt: createdAt()
	},
	(t) => [
		check('users_email_lower', sql`${t.email} = lower(${t.email}) and position('@' in ${t.email}) > 1`),
		check('users_name_given', sql`length(trim(${t.name})) > 0`),
		check('users_theme', sql`${t.theme} in ('system', 'light', 'dark')`)
	]
);

/** The cookie holds the secret; here is only its SHA-256. */
export const sessions = pgTable(
	'sessions',
	{
		tokenSha256: bytes('token_sha256').primaryKey(),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id, { onDelete: 'cascade' }),
		expiresAt: instant('expires_at').notNull(),
		createdAt: createdAt(),
		client: text('client').notNull().default('')
	},
	(t) => [index('sessions_user').on(t.userId), check('sessions_digest', sql`length(${t.tokenSha256}) = 32`)]
);

/** Mailed secrets: invitation, address verification, password reset. Used once. */
export const accountTokens = pgTable(
	'account_tokens',
	{
		tokenSha256: bytes('token_sha256').primaryKey(),
		kind: text('kind').notNull(),
		email: text('email').notNull(),
		userId: uuid('user_id').references(() => users.id, { onDelete: 'cascade' }),
		/** For an invitation: { courseId, role, labSectionId?, name? } */
		grants: jsonb('grants'),
		expiresAt: instant('expires_at').notNull(),
		usedAt: instant('used_at'),
		createdAt: createdAt()
	},
	(t) => [
		check('account_tokens_kind', sql`${t.kind} in ('invitation', 'verification', 'reset')`),
		check('account_tokens_digest', sql`length(${t.tokenSha256}) = 32`),
		index('account_tokens_email').on(t.email)
	]
);

/** Counters of the sign-in limiter, shared by all processes. */
export const signInLimits = pgTable('sign_in_limits', {
	key: text('key').primaryKey(),
	points: integer('points').notNull().default(0),
	expire: instant('expire')
});

/** What a client may repeat: the hash of the request and the answer it got, in the effect's own transaction. */
export const idempotency = pgTable(
	'idempotency',
	{
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id, { onDelete: 'cascade' }),
		key: text('key').notNull(),
		requestSha256: bytes('request_sha256').notNull(),
		response: jsonb('response'),
		createdAt: createdAt()
	},
	(t) => [primaryKey({ columns: [t.userId, t.key] }), index('idempotency_age').on(t.createdAt)]
);
