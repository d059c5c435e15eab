import { sql } from 'drizzle-orm';
import { bigint, check, index, integer, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { users } from './accounts';
import { bytes, createdAt, id, instant } from './columns';
import { assignments, teams } from './courses';
import { parts } from './experiments';

/** A team's work on one assignment. Whoever works alone is a team of one. */
export const work = pgTable(
	'work',
	{
		id: id(),
		assignmentId: uuid('assignment_id')
			.notNull()
			.references(() => assignments.id),
		teamId: uuid('team_id')
			.notNull()
			.references(() => teams.id),
		createdAt: createdAt()
	},
	(t) => [unique('work_one').on(t.assignmentId, t.teamId), index('work_team').on(t.teamId)]
);

/** One report for each author. `alias` is random: an id with a time in it would tell a marker when a hidden author handed in. */
export const reports = pgTable(
	'reports',
	{
		id: id(),
		workId: uuid('work_id')
			.notNull()
			.references(() => work.id),
		authorId: uuid('author_id')
			.notNull()
			.references(() => users.id),
		alias: text('alias').notNull().unique(),
		/** the snapshot that counts; must be one of this report's own (foreign key in the migrations, for it is circular) */
		countedSnapshotId: uuid('counted_snapshot_id'),
		createdAt: createdAt()
	},
	(t) => [
		unique('reports_one').on(t.workId, t.authorId),
		index('reports_author').on(t.authorId),
		check('reports_alias', sql`${t.alias} ~ '^[a-z]+-[0-9a-z]{6,}$'`)
	]
);

/** Live documents: readings and team sections have no author; an author's sections do. */
export const documents = pgTable(
	'documents',
	{
		id: id(),
		workId: uuid('work_id')
			.notNull()
			.references(() => work.id),
		authorId: uuid('author_id').references(() => users.id),
		kind: text('kind').notNull(),
		key: text('key').notNull(),
		seq: bigint('seq', { mode: 'number' }).notNull().default(0),
		epoch: integer('epoch').notNull().default(1),
		frozenAt: instant('frozen_at'),
		createdAt: createdAt()
	},
	(t) => [
		unique('documents_one').on(t.workId, t.authorId, t.kind, t.key).nullsNotDistinct(),
		check('documents_kind', sql`${t.kind} in ('readings', 'section', 'workings', 'plan', 'notebook')`),
		check('documents_team_kinds', sql`${t.kind} <> 'readings' or ${t.authorId} is null`)
	]
);

/** The log is the truth. Deleted by compaction only. */
export const documentUpdates = pgTable(
	'document_updates',
	{
		documentId: uuid('document_id')
			.notNull()
			.references(() => documents.id),
		seq: bigint('seq', { mode: 'number' }).notNull(),
		/** null: seeded by the server */
		userId: uuid('user_id').references(() => users.id),
		bytes: bytes('bytes').notNull(),
		at: createdAt()
	},
	(t) => [primaryKey({ columns: [t.documentId, t.seq] })]
);

export const documentBases = pgTable('document_bases', {
	documentId: uuid('document_id')
		.primaryKey()
		.references(() => documents.id),
	uptoSeq: bigint('upto_seq', { mode: 'number' }).notNull(),
	state: bytes('state').notNull()
});

export const documentVersions = pgTable(
	'document_versions',
	{
		documentId: uuid('document_id')
			.notNull()
			.references(() => documents.id),
		seq: bigint('seq', { mode: 'number' }).notNull(),
		text: text('text').notNull(),
		byId: uuid('by_id').references(() => users.id),
		at: createdAt()
	},
	(t) => [primaryKey({ columns: [t.documentId, t.seq] })]
);

export const seals = pgTable('seals', {
	id: id(),
	documentId: uuid('document_id')
		.notNull()
		.unique()
		.references(() => documents.id),
	seq: bigint('seq', { mode: 'number' }).notNull(),
	part: bytes('part')
		.notNull()
		.references(() => parts.sha256),
	initialledById: uuid('initialled_by_id')
		.notNull()
		.references(() => users.id),
	at: createdAt()
});

export const amendments = pgTable(
	'amendments',
	{
		sealId: uuid('seal_id')
			.notNull()
			.references(() => seals.id),
		n: integer('n').notNull(),
		row: text('row').notNull(),
		column: text('column').notNull(),
		before: text('before').notNull(),
		after: text('after').notNull(),
		reason: text('reason').notNull(),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id),
		at: createdAt()
	},
	(t) => [
		primaryKey({ columns: [t.sealId, t.n] }),
		check('amendments_reason', sql`length(trim(${t.reason})) > 0`)
	]
);

/** What was handed in. Immutable. */
export const snapshots = pgTable(
	'snapshots',
	{
		id: id(),
		reportId: uuid('report_id')
			.notNull()
			.references(() => reports.id),
		attempt: integer('attempt').notNull(),
		manifest: bytes('manifest')
			.notNull()
			.references(() => parts.sha256),
		engine: text('engine').notNull(),
		receivedAt: instant('received_at').notNull(),
		/** the due instant as it was ruled at that moment */
		dueAt: instant('due_at').notNull(),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id)
	},
	(t) => [
		unique('snapshots_attempt').on(t.reportId, t.attempt),
		unique('snapshots_of_report').on(t.reportId, t.id),
		check('snapshots_attempt_positive', sql`${t.attempt} >= 1`)
	]
);

export const snapshotSections = pgTable(
	'snapshot_sections',
	{
		snapshotId: uuid('snapshot_id')
			.notNull()
			.references(() => snapshots.id),
		position: integer('position').notNull(),
		key: text('key').notNull(),
		title: text('title').notNull(),
		documentId: uuid('document_id')
			.notNull()
			.references(() => documents.id),
		seq: bigint('seq', { mode: 'number' }).notNull(),
		part: bytes('part')
			.notNull()
			.references(() => parts.sha256)
	},
	(t) => [primaryKey({ columns: [t.snapshotId, t.position] })]
);
