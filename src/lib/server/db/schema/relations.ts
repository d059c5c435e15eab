import { relations } from 'drizzle-orm';
import { users } from './accounts';
import { assignments, courses, labSections, members, teamMembers, teams } from './courses';
import { criteria, experiments, experimentVersions, levels, rubricVersions } from './experiments';
import { anchors, markings, remarkRevisions, remarks } from './marking';
import { documents, reports, snapshots, snapshotSections, work } from './work';

export const courseRelations = relations(courses, ({ many }) => ({
	labSections: many(labSections),
	members: many(members),
	teams: many(teams),
	assignments: many(assignments)
}));

export const labSectionRelations = relations(labSections, ({ one, many }) => ({
	course: one(courses, { fields: [labSections.courseId], references: [courses.id] }),
	teams: many(teams)
}));

export const memberRelations = relations(members, ({ one }) => ({
	course: one(courses, { fields: [members.courseId], references: [courses.id] }),
	user: one(users, { fields: [members.userId], references: [users.id] }),
	labSection: one(labSections, { fields: [members.labSectionId], references: [labSections.id] })
}));

export const teamRelations = relations(teams, ({ one, many }) => ({
	course: one(courses, { fields: [teams.courseId], references: [courses.id] }),
	labSection: one(labSections, { fields: [teams.labSectionId], references: [labSections.id] }),
	members: many(teamMembers),
	work: many(work)
}));

export const teamMemberRelations = relations(teamMembers, ({ one }) => ({
	team: one(teams, { fields: [teamMembers.teamId], references: [teams.id] }),
	user: one(users, { fields: [teamMembers.userId], references: [users.id] })
}));

export const experimentVersionRelations = relations(experimentVersions, ({ one }) => ({
	experiment: one(experiments, { fields: [experimentVersions.experimentId], references: [experiments.id] })
}));

export const rubricVersionRelations = relations(rubricVersions, ({ many }) => ({ criteria: many(criteria) }));

export const criterionRelations = relations(criteria, ({ one, many }) => ({
	rubricVersion: one(rubricVersions, { fields: [criteria.rubricVersionId], references: [rubricVersions.id] }),
	levels: many(levels)
}));

export const levelRelations = relations(levels, ({ one }) => ({
	criterion: one(criteria, { fields: [levels.criterionId], references: [criteria.id] })
}));

export const assignmentRelations = relations(assignments, ({ one, many }) => ({
	course: one(courses, { fields: [assignments.courseId], references: [courses.id] }),
	experimentVersion: one(experimentVersions, {
		fields: [assignments.experimentVersionId],
		references: [experimentVersions.id]
	}),
	rubricVersion: one(rubricVersions, {
		fields: [assignments.rubricVersionId],
		references: [rubricVersions.id]
	}),
	work: many(work)
}));

export const workRelations = relations(work, ({ one, many }) => ({
	assignment: one(assignments, { fields: [work.assignmentId], references: [assignments.id] }),
	team: one(teams, { fields: [work.teamId], references: [teams.id] }),
	reports: many(reports),
	documents: many(documents)
}));

export const reportRelations = relations(reports, ({ one, many }) => ({
	work: one(work, { fields: [reports.workId], references: [work.id] }),
	author: one(users, { fields: [reports.authorId], references: [users.id] }),
	snapshots: many(snapshots)
}));

export const documentRelations = relations(documents, ({ one }) => ({
	work: one(work, { fields: [documents.workId], references: [work.id] }),
	author: one(users, { fields: [documents.authorId], references: [users.id] })
}));

export const snapshotRelations = relations(snapshots, ({ one, many }) => ({
	report: one(reports, { fields: [snapshots.reportId], references: [reports.id] }),
	sections: many(snapshotSections),
	markings: many(markings)
}));

export const snapshotSectionRelations = relations(snapshotSections, ({ one }) => ({
	snapshot: one(snapshots, { fields: [snapshotSections.snapshotId], references: [snapshots.id] })
}));

export const markingRelations = relations(markings, ({ one, many }) => ({
	snapshot: one(snapshots, { fields: [markings.snapshotId], references: [snapshots.id] }),
	grader: one(users, { fields: [markings.graderId], references: [users.id] }),
	remarks: many(remarks)
}));

export const remarkRelations = relations(remarks, ({ one, many }) => ({
	marking: one(markings, { fields: [remarks.markingId], references: [markings.id] }),
	revisions: many(remarkRevisions),
	anchors: many(anchors)
}));
