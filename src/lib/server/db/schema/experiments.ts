import { sql } from 'drizzle-orm';
import { check, integer, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { bytes, createdAt, id } from './columns';

/** Content-addressed bytes of snapshots and templates. Erasing empties the bytes and leaves the hash. */
export const parts = pgTable(
	'parts',
	{ sha256: bytes('sha256').primaryKey(), bytes: bytes('bytes'), createdAt: createdAt() },
	(t) => [
		check('parts_digest', sql`length(${t.sha256}) = 32`),
		check('parts_content', sql`${t.bytes} is null or ${t.sha256} = sha256(${t.bytes})`)
	]
);

export const experiments = pgTable('experiments', {
	id: id(),
	slug: text('slug').notNull().unique(),
	title: text('title').notNull()
});

/** Append-only: the compiled worksheet as canonical JSON stands in the part. */
export const experimentVersions = pgTable(
	'experiment_versions',
	{
		id: id(),
		experimentId: uuid('experiment_id')
			.notNull()
			.references(() => experiments.id),
		n: integer('n').notNull(),
		part: bytes('part')
			.notNull()
			.references(() => parts.sha256),
		createdAt: createdAt()
	},
	(t) => [unique('experiment_versions_n').on(t.experimentId, t.n)]
);

export const rubrics = pgTable('rubrics', {
	id: id(),
	slug: text('slug').notNull().unique(),
	title: text('title').notNull()
});

export const rubricVersions = pgTable(
	'rubric_versions',
	{
		id: id(),
		rubricId: uuid('rubric_id')
			.notNull()
			.references(() => rubrics.id),
		n: integer('n').notNull(),
		title: text('title').notNull(),
		createdAt: createdAt()
	},
	(t) => [unique('rubric_versions_n').on(t.rubricId, t.n)]
);

export const criteria = pgTable(
	'criteria',
	{
		id: id(),
		rubricVersionId: uuid('rubric_version_id')
			.notNull()
			.references(() => rubricVersions.id),
		key: text('key').notNull(),
		position: integer('position').notNull(),
		title: text('title').notNull()
	},
	(t) => [
		unique('criteria_key').on(t.rubricVersionId, t.key),
		unique('criteria_position').on(t.rubricVersionId, t.position),
		unique('criteria_in_rubric').on(t.rubricVersionId, t.id)
	]
);

/** Points in hundredths, so that sums are exact. */
export const levels = pgTable(
	'levels',
	{
		criterionId: uuid('criterion_id')
			.notNull()
			.references(() => criteria.id),
		level: integer('level').notNull(),
		text: text('text').notNull(),
		pointsHundredths: integer('points_hundredths').notNull()
	},
	(t) => [
		primaryKey({ columns: [t.criterionId, t.level] }),
		check('levels_points', sql`${t.pointsHundredths} >= 0 and ${t.level} >= 0`)
	]
);
