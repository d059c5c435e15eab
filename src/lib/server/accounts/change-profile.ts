import { eq } from 'drizzle-orm';
import { profileChange } from '$lib/contracts/accounts';
import * as audit from '../audit';
import type { Act, Viewer } from '../auth';
import { schema, transact } from '../db';
import { parse } from './parse';
import { lockPerson } from './people';

/** Changes what others read (name, initials) and the theme; what is left out stays. */
export async function changeProfile(act: Act, given: unknown): Promise<Viewer> {
	const change = parse(profileChange, given);
	return transact(act.repeatable, async (tx) => {
		const before = await lockPerson(tx, act.viewer.id);
		const after = {
			name: change.name ?? before.name,
			initials: change.initials ?? before.initials,
			theme: change.theme ?? (before.theme as Viewer['theme'])
		};
		await tx.update(schema.users).set(after).where(eq(schema.users.id, before.id));
		await audit.record(tx, {
			actorId: act.viewer.id,
			action: 'account.changeProfile',
			subjectKind: 'user',
			subjectId: act.viewer.id,
			detail: { from: { name: before.name, initials: before.initials, theme: before.theme }, to: after }
		});
		return { ...act.viewer, ...after };
	});
}
