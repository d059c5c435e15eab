import { database } from '../db';
import type { InvitationGrant } from './invite';
import { courseLabel, courseOf, type CourseRole } from './membership';
import { personByEmail } from './people';
import { findToken, type TokenState } from './tokens';

export interface Invitation {
	state: TokenState;
	email: string;
	role: CourseRole;
	course: string;
	institution: string;
	/** as the instructor typed it */
	name: string;
	/** the address has an account: sign in instead of choosing a password */
	known: boolean;
}

/** What an invitation's page shows to whoever holds the link. */
export async function invitationOf(token: string): Promise<Invitation> {
	const { row, state } = await findToken('invitation', token);
	const grant = row.grants as InvitationGrant;
	const course = await courseOf(database(), grant.courseId);
	const person = await personByEmail(database(), row.email);
	return {
		state,
		email: row.email,
		role: grant.role,
		course: courseLabel(course),
		institution: course.institution,
		name: grant.name ?? '',
		known: Boolean(person?.passwordHash)
	};
}
