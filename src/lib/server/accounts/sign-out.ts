import * as audit from '../audit';
import { endSession, type Act } from '../auth';
import { transact } from '../db';

/** Ends the session that asks. */
export async function signOut(act: Act, session: Uint8Array): Promise<void> {
	await transact(undefined, async (tx) => {
		await endSession(tx, act.viewer.id, session);
		await audit.record(tx, {
			actorId: act.viewer.id,
			action: 'account.signOut',
			subjectKind: 'user',
			subjectId: act.viewer.id
		});
	});
}
