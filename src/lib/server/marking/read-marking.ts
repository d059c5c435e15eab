import type { MarkingState } from '$lib/contracts/marking';
import { authorise, type Viewer } from '../auth';
import { database } from '../db';
import { notFound } from '../errors';
import { stateOf } from './state';

/** A marking for its marker, or for the course's instructors. The author reads marks on the returned sheet instead. */
export async function readMarking(viewer: Viewer, markingId: string): Promise<MarkingState> {
	const db = database();
	await authorise(db, viewer, 'marking.see', markingId);
	const state = await stateOf(db, markingId);
	if (!state) throw notFound();
	return state;
}
