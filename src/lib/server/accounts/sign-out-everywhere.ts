import * as audit from '../audit';
import { endSessions, type Act } from '../auth';
import { transact } from '../db';

/** Ends every session of the person, the one that asks included. */
export async function signOutEverywhere(act: Act): Promise<void> {
	await transact(undefined, async (tx) => {
		await endSessions(tx, act.viewer.id);
		await audit.record(tx, {
			actorId: act.viewer.id,
			action: 'account.signOutEverywhere',
			subjectKind: 'user',
			subjectId: act.viewer.id
		});
	});
}
