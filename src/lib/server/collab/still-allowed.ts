import type { DocumentAddress } from '$lib/collab';
import type { Database } from '../db';
import * as readings from '../readings';

/** What became of a connection's rights since it was made. */
export async function stillAllowed(
	db: Database,
	personOf: (cookieHeader: string | undefined) => Promise<{ id: string } | null>,
	connection: { personId: string; cookie: string | undefined },
	name: DocumentAddress,
	readOnly: boolean
): Promise<'as-before' | 'changed' | 'signed-out'> {
	const person = await personOf(connection.cookie);
	if (person?.id !== connection.personId) return 'signed-out';
	const access = await readings.documentAccess(db, person.id, name.id);
	return access?.write === !readOnly ? 'as-before' : 'changed';
}
