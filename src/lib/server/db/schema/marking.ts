import { sql } from 'drizzle-orm';
import {
	boolean,
	check,
	foreignKey,
	index,
	integer,
	jsonb,
	pgTable,
	primaryKey,
	text,
	unique,
	uniqueIndex,
	uuid
} from 'drizzle-orm/pg-core';
import { users } from './accounts';
import { createdAt, id, instant } from './columns';
import { assignments, courses } from './courses';
import { criteria, levels, rubricVersions } from './experiments';
import { reports, snapshots } from './work';

/** A grader's evening: an order drawn once, so that drift does not follow the alphabet. */
export const sittings = pgTable('sittings', {
	id: id(),
	assignmentId: uuid('assignment_id')
		.notNull()
		.references(() => assignments.id),
	graderId: uuid('grader_id')
		.notNull()
		.references(() => users.id),
	createdAt: createdAt()
});

export const sittingReports = pgTable(
	'sitting_reports',
	{
		sittingId: uuid('sitting_id')
			.notNull()
			.references(() => sittings.id),
		position: integer('position').notNull(),
		reportId: uuid('report_id')
			.notNull()
			.references(() => reports.id)
	},
	(t) => [
		primaryKey({ columns: [t.sittingId, t.position] }),
		unique('sitting_reports_once').on(t.sittingId, t.reportId)
	]
);

export const markings = pgTable(
	'markings',
	{
		id: id(),
		snapshotId: uuid('snapshot_id')
			.notNull()
			.references(() => snapshots.id),
		rubricVersionId: uuid('rubric_version_id')
			.notNull()
			.references(() => rubricVersions.id),
		graderId: uuid('grader_id')
			.notNull()
			.references(() => users.id),
		kind: text('kind').notNull().default('first'),
		/** what If-Match speaks of; raised by every write to scores or remarks */
		revision: integer('revision').notNull().default(1),
		startedAt: createdAt(),
		finishedAt: instant('finished_at')
	},
	(t) => [
		unique('markings_grader').on(t.snapshotId, t.graderId),
		uniqueIndex('markings_kind')
			.on(t.snapshotId, t.kind)
			.where(sql`kind <> 'common'`),
		unique('markings_rubric').on(t.id, t.rubricVersionId),
		check('markings_kind_known', sql`${t.kind} in ('first', 'second', 'third', 'common')`)
	]
);

export const scoreEvents = pgTable(
	'score_events',
	{
		markingId: uuid('marking_id').notNull(),
		rubricVersionId: uuid('rubric_version_id').notNull(),
		criterionId: uuid('criterion_id').notNull(),
		n: integer('n').notNull(),
		/** null: the level was taken away again */
		level: integer('level'),
		pointsHundredths: integer('points_hundredths'),
		reason: text('reason').notNull().default(''),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id),
		at: createdAt()
	},
	(t) => [
		primaryKey({ columns: [t.markingId, t.criterionId, t.n] }),
		foreignKey({
			name: 'score_events_marking',
			columns: [t.markingId, t.rubricVersionId],
			foreignColumns: [markings.id, markings.rubricVersionId]
		}),
		foreignKey({
			name: 'score_events_criterion',
			columns: [t.rubricVersionId, t.criterionId],
			foreignColumns: [criteria.rubricVersionId, criteria.id]
		}),
		foreignKey({
			name: 'score_events_level',
			columns: [t.criterionId, t.level],
			foreignColumns: [levels.criterionId, levels.level]
		}),
		check('score_events_points', sql`(${t.level} is null) = (${t.pointsHundredths} is null)`)
	]
);

export const remarks = pgTable(
	'remarks',
	{
		id: id(),
		markingId: uuid('marking_id')
			.notNull()
			.references(() => markings.id),
		createdAt: createdAt()
	},
	(t) => [index('remarks_marking').on(t.markingId)]
);

export const remarkRevisions = pgTable(
	'remark_revisions',
	{
		remarkId: uuid('remark_id')
			.notNull()
			.references(() => remarks.id),
		n: integer('n').notNull(),
		kind: text('kind').notNull(),
		body: text('body').notNull(),
		deleted: boolean('deleted').notNull().default(false),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id),
		at: createdAt()
	},
	(t) => [
		primaryKey({ columns: [t.remarkId, t.n] }),
		check('remark_revisions_kind', sql`${t.kind} in ('to correct', 'question', 'note', 'well done')`)
	]
);

export const anchors = pgTable(
	'anchors',
	{
		remarkId: uuid('remark_id')
			.notNull()
			.references(() => remarks.id),
		snapshotId: uuid('snapshot_id')
			.notNull()
			.references(() => snapshots.id),
		sectionPosition: integer('section_position').notNull(),
		/** W3C Web Annotation selectors */
		selector: jsonb('selector').notNull(),
		/** version of the plain-text projection the positions count in */
		projection: integer('projection').notNull(),
		attached: boolean('attached').notNull(),
		at: createdAt()
	},
	(t) => [primaryKey({ columns: [t.remarkId, t.snapshotId] })]
);

export const keptRemarks = pgTable(
	'kept_remarks',
	{
		id: id(),
		courseId: uuid('course_id')
			.notNull()
			.references(() => courses.id),
		ownerId: uuid('owner_id')
			.notNull()
			.references(() => users.id),
		kind: text('kind').notNull(),
		body: text('body').notNull(),
		uses: integer('uses').notNull().default(0),
		createdAt: createdAt()
	},
	(t) => [unique('kept_remarks_once').on(t.courseId, t.ownerId, t.body)]
);

/** Replies to remarks by the report's author once returned. */
export const replies = pgTable('replies', {
	id: id(),
	remarkId: uuid('remark_id')
		.notNull()
		.references(() => remarks.id),
	byId: uuid('by_id')
		.notNull()
		.references(() => users.id),
	body: text('body').notNull(),
	at: createdAt()
});

export const finalMarks = pgTable(
	'final_marks',
	{
		reportId: uuid('report_id')
			.notNull()
			.references(() => reports.id),
		n: integer('n').notNull(),
		source: text('source').notNull(),
		markingId: uuid('marking_id').references(() => markings.id),
		/** after the late rule */
		pointsHundredths: integer('points_hundredths').notNull(),
		deductionHundredths: integer('deduction_hundredths').notNull().default(0),
		reason: text('reason').notNull(),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id),
		at: createdAt()
	},
	(t) => [
		primaryKey({ columns: [t.reportId, t.n] }),
		check('final_marks_source', sql`${t.source} in ('marking', 'settled', 'adjusted', 'appeal')`)
	]
);

export const releases = pgTable(
	'releases',
	{
		reportId: uuid('report_id')
			.notNull()
			.references(() => reports.id),
		n: integer('n').notNull(),
		action: text('action').notNull(),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id),
		at: createdAt()
	},
	(t) => [
		primaryKey({ columns: [t.reportId, t.n] }),
		check('releases_action', sql`${t.action} in ('return', 'withdraw')`)
	]
);

/** n = 1 asks, later rows answer. A trigger refuses a decision by the first marker. */
export const appeals = pgTable(
	'appeals',
	{
		reportId: uuid('report_id')
			.notNull()
			.references(() => reports.id),
		criterionId: uuid('criterion_id')
			.notNull()
			.references(() => criteria.id),
		n: integer('n').notNull(),
		action: text('action').notNull(),
		body: text('body').notNull(),
		byId: uuid('by_id')
			.notNull()
			.references(() => users.id),
		at: createdAt()
	},
	(t) => [
		primaryKey({ columns: [t.reportId, t.criterionId, t.n] }),
		check('appeals_action', sql`${t.action} in ('ask', 'uphold', 'change', 'withdraw')`)
	]
);
