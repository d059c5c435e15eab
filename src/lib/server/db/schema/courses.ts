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
	uuid
} from 'drizzle-orm/pg-core';
import { users } from './accounts';
import { bytes, createdAt, id, instant, instantRange, wallClock } from './columns';
import { experimentVersions, rubricVersions } from './experiments';

export const courses = pgTable(
	'courses',
	{
		id: id(),
		/** Stands in addresses: /c/pc310 */
		slug: text('slug').notNull().unique(),
		code: text('code').notNull(),
		title: text('title').notNull(),
		institution: text('institution').notNull(),
		/** IANA name */
		zone: text('zone').notNull(),
		startsOn: text('starts_on').notNull(),
		/** { graceMinutes, steps: [{ upToHours, percent }], refuseAfterHours } as lib/rubrics reads it */
		lateRule: jsonb('late_rule').notNull(),
		/** what a plus-minus means in this course */
		uncertaintyKind: text('uncertainty_kind').notNull().default('standard'),
		createdAt: createdAt()
	},
	(t) => [
		check('courses_slug', sql`${t.slug} ~ '^[a-z0-9][a-z0-9-]{0,62}$'`),
		check('courses_uncertainty_kind', sql`${t.uncertaintyKind} in ('standard', 'expanded')`)
	]
);

export const labSections = pgTable(
	'lab_sections',
	{
		id: id(),
		courseId: uuid('course_id')
			.notNull()
			.references(() => courses.id),
		name: text('name').notNull(),
		/** in words: 'Tuesday 13:00' */
		meets: text('meets').notNull()
	},
	(t) => [
		unique('lab_sections_name').on(t.courseId, t.name),
		unique('lab_sections_course_id').on(t.courseId, t.id)
	]
);

export const members = pgTable(
	'members',
	{
		courseId: uuid('course_id')
			.notNull()
			.references(() => courses.id),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		role: text('role').notNull(),
		/** a student's lab section; a grader's sections stand in grading_sections */
		labSectionId: uuid('lab_section_id'),
		joinedAt: createdAt(),
		leftAt: instant('left_at')
	},
	(t) => [
		primaryKey({ columns: [t.courseId, t.userId, t.role] }),
		check('members_role', sql`${t.role} in ('student', 'grader', 'instructor')`),
		foreignKey({
			name: 'members_lab_section',
			columns: [t.courseId, t.labSectionId],
			foreignColumns: [labSections.courseId, labSections.id]
		}),
		index('members_user').on(t.userId)
	]
);

/** Which lab sections a grader marks. */
export const gradingSections = pgTable(
	'grading_sections',
	{
		labSectionId: uuid('lab_section_id')
			.notNull()
			.references(() => labSections.id),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id)
	},
	(t) => [primaryKey({ columns: [t.labSectionId, t.userId] }), index('grading_sections_user').on(t.userId)]
);

/** Four random bench words that let whoever hears them join; valid for a week. */
export const benchWords = pgTable(
	'bench_words',
	{
		id: id(),
		courseId: uuid('course_id')
			.notNull()
			.references(() => courses.id),
		labSectionId: uuid('lab_section_id').notNull(),
		wordsSha256: bytes('words_sha256').notNull().unique(),
		/** shown again to the instructor who hands them out */
		words: text('words').notNull(),
		expiresAt: instant('expires_at').notNull(),
		createdBy: uuid('created_by')
			.notNull()
			.references(() => users.id),
		createdAt: createdAt()
	},
	(t) => [
		foreignKey({
			name: 'bench_words_lab_section',
			columns: [t.courseId, t.labSectionId],
			foreignColumns: [labSections.courseId, labSections.id]
		})
	]
);

export const teams = pgTable(
	'teams',
	{
		id: id(),
		courseId: uuid('course_id').notNull(),
		labSectionId: uuid('lab_section_id').notNull(),
		name: text('name').notNull()
	},
	(t) => [
		unique('teams_name').on(t.courseId, t.name),
		unique('teams_course_id').on(t.courseId, t.id),
		foreignKey({
			name: 'teams_lab_section',
			columns: [t.courseId, t.labSectionId],
			foreignColumns: [labSections.courseId, labSections.id]
		})
	]
);

/** Nobody is in two teams of a course at the same moment: an exclusion constraint stands in the migrations. */
export const teamMembers = pgTable(
	'team_members',
	{
		id: id(),
		teamId: uuid('team_id').notNull(),
		courseId: uuid('course_id').notNull(),
		userId: uuid('user_id')
			.notNull()
			.references(() => users.id),
		during: instantRange('during').notNull()
	},
	(t) => [
		foreignKey({
			name: 'team_members_team',
			columns: [t.courseId, t.teamId],
			foreignColumns: [teams.courseId, teams.id]
		}),
		index('team_members_team_index').on(t.teamId),
		index('team_members_user').on(t.userId)
	]
);

export const assignments = pgTable(
	'assignments',
	{
		id: id(),
		courseId: uuid('course_id')
			.notNull()
			.references(() => courses.id),
		experimentVersionId: uuid('experiment_version_id')
			.notNull()
			.references(() => experimentVersions.id),
		rubricVersionId: uuid('rubric_version_id')
			.notNull()
			.references(() => rubricVersions.id),
		title: text('title').notNull(),
		position: integer('position').notNull(),
		dueLocal: wallClock('due_local').notNull(),
		closesLocal: wallClock('closes_local').notNull(),
		hideNames: boolean('hide_names').notNull().default(true),
		createdAt: createdAt()
	},
	(t) => [
		unique('assignments_position').on(t.courseId, t.position),
		unique('assignments_rubric').on(t.id, t.rubricVersionId),
		check('assignments_closing', sql`${t.closesLocal} >= ${t.dueLocal}`)
	]
);

export const extensions = pgTable(
	'extensions',
	{
		id: id(),
		assignmentId: uuid('assignment_id')
			.notNull()
			.references(() => assignments.id),
		userId: uuid('user_id').references(() => users.id),
		teamId: uuid('team_id').references(() => teams.id),
		dueLocal: wallClock('due_local').notNull(),
		closesLocal: wallClock('closes_local').notNull(),
		reason: text('reason').notNull(),
		grantedBy: uuid('granted_by')
			.notNull()
			.references(() => users.id),
		createdAt: createdAt()
	},
	(t) => [
		check('extensions_whose', sql`(${t.userId} is null) <> (${t.teamId} is null)`),
		check('extensions_closing', sql`${t.closesLocal} >= ${t.dueLocal}`),
		unique('extensions_one').on(t.assignmentId, t.userId, t.teamId).nullsNotDistinct()
	]
);
