import { sql } from 'drizzle-orm';
import { bigint, check, index, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import { users } from './accounts';
import { bytes, createdAt, id, instant } from './columns';
import { courses } from './courses';

/** Bytes in the object store, keyed by their hash. */
export const blobs = pgTable(
	'blobs',
	{
		sha256: bytes('sha256').primaryKey(),
		size: bigint('size', { mode: 'number' }).notNull(),
		mediaType: text('media_type').notNull(),
		unreferencedSince: instant('unreferenced_since'),
		createdAt: createdAt()
	},
	(t) => [check('blobs_digest', sql`length(${t.sha256}) = 32`)]
);

/** What addresses name: never the hash. */
export const files = pgTable(
	'files',
	{
		id: id(),
		sha256: bytes('sha256')
			.notNull()
			.references(() => blobs.sha256),
		subjectKind: text('subject_kind').notNull(),
		subjectId: uuid('subject_id').notNull(),
		name: text('name').notNull(),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id),
		createdAt: createdAt()
	},
	(t) => [index('files_subject').on(t.subjectKind, t.subjectId)]
);

/** Begun and not yet recorded; swept when expired. */
export const uploads = pgTable('uploads', {
	id: id(),
	byId: uuid('by_id')
		.notNull()
		.references(() => users.id),
	subjectKind: text('subject_kind').notNull(),
	subjectId: uuid('subject_id').notNull(),
	expiresAt: instant('expires_at').notNull(),
	createdAt: createdAt()
});

/** Mail to send: one row for each thing said to one person about one subject. */
export const outbox = pgTable(
	'outbox',
	{
		id: id(),
		kind: text('kind').notNull(),
		subject: text('subject').notNull(),
		recipient: text('recipient').notNull(),
		payload: jsonb('payload').notNull(),
		attempts: integer('attempts').notNull().default(0),
		lastProblem: text('last_problem'),
		createdAt: createdAt(),
		sentAt: instant('sent_at')
	},
	(t) => [
		unique('outbox_once').on(t.kind, t.subject, t.recipient),
		index('outbox_unsent')
			.on(t.createdAt)
			.where(sql`sent_at is null`)
	]
);

/** Who did what to what. Append-only. */
export const audit = pgTable(
	'audit',
	{
		id: id(),
		at: createdAt(),
		actorId: uuid('actor_id').references(() => users.id),
		courseId: uuid('course_id').references(() => courses.id),
		action: text('action').notNull(),
		subjectKind: text('subject_kind').notNull(),
		subjectId: text('subject_id').notNull(),
		detail: jsonb('detail').notNull().default({})
	},
	(t) => [index('audit_course').on(t.courseId, t.id), index('audit_subject').on(t.subjectKind, t.subjectId)]
);
