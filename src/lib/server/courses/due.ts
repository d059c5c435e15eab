import { and, eq, or, sql } from 'drizzle-orm';
import type { LateRule } from '$lib/rubrics';
import { schema, type Database, type Transaction } from '../db';
import { notFound } from '../errors';
import { instantOf } from './zone';

const { assignments, courses, extensions, teamMembers } = schema;

export interface Due {
	dueAt: Date;
	closesAt: Date;
	dueLocal: string;
	closesLocal: string;
	zone: string;
	rule: LateRule;
	extended: boolean;
}

/** When a person's report on an assignment is due and closes, extensions of person and team included. */
export async function dueFor(db: Database | Transaction, assignmentId: string, userId: string): Promise<Due> {
	const [row] = await db
		.select({ assignment: assignments, zone: courses.zone, rule: courses.lateRule })
		.from(assignments)
		.innerJoin(courses, eq(courses.id, assignments.courseId))
		.where(eq(assignments.id, assignmentId));
	if (!row) throw notFound();
	const granted = await db
		.select({ dueLocal: extensions.dueLocal, closesLocal: extensions.closesLocal })
		.from(extensions)
		.where(
			and(
				eq(extensions.assignmentId, assignmentId),
				or(
					eq(extensions.userId, userId),
					sql`${extensions.teamId} in (select ${teamMembers.teamId} from ${teamMembers} where ${teamMembers.userId} = ${userId} and ${teamMembers.during} @> now())`
				)
			)
		);
	const later = (a: string, b: string) => (a >= b ? a : b);
	const dueLocal = granted.map((e) => e.dueLocal).reduce(later, row.assignment.dueLocal);
	const closesLocal = granted.map((e) => e.closesLocal).reduce(later, row.assignment.closesLocal);
	return {
		dueAt: instantOf(dueLocal, row.zone),
		closesAt: instantOf(closesLocal, row.zone),
		dueLocal,
		closesLocal,
		zone: row.zone,
		rule: row.rule as LateRule,
		extended: granted.length > 0
	};
}
