import type { MarkingState } from '$lib/contracts/marking';
import { sql } from 'drizzle-orm';
import * as audit from '../audit';
import type { Act } from '../auth';
import { transact, type Transaction } from '../db';
import { conflict, unprocessable } from '../errors';
import * as experiments from '../experiments';
import { nextReport, sittingFor } from './read-sitting';
import { levelsOf, stateOf } from './state';
import {
	courseOfMarking,
	isReturned,
	lockMarking,
	raiseRevision,
	requireRevision,
	type MarkingRow
} from './steps';

async function nextAfter(tx: Transaction, act: Act, marking: MarkingRow, alias: string) {
	const [row] = await tx.execute<{ assignment_id: string }>(
		sql`select w.assignment_id from snapshots s join reports r on r.id = s.report_id join work w on w.id = r.work_id
			where s.id = ${marking.snapshotId}`
	);
	const sitting = row ? await sittingFor(act.viewer, row.assignment_id, tx) : null;
	return sitting ? nextReport(sitting.reports, alias) : null;
}

/**
 * Finishes a marking and names the next report of the sitting.
 * Errors: 'unprocessable' naming the criteria that have no level; 'stale'.
 */
export async function finishMarking(
	act: Act,
	input: { marking: string }
): Promise<{ marking: MarkingState; next: { alias: string; label: string } | null }> {
	return transact(act.repeatable, async (tx) => {
		const marking = await lockMarking(tx, act, 'marking.change', input.marking);
		if (!marking.finishedAt) {
			requireRevision(act, marking);
			const rubric = await experiments.rubricOfVersion(tx, marking.rubricVersionId);
			const set = new Set((await levelsOf(tx, marking.id)).map((row) => row.criterion));
			const open = rubric.criteria.filter((criterion) => !set.has(criterion.id)).map(({ title }) => title);
			if (open.length > 0)
				throw unprocessable(`No level yet for: ${open.join(', ')}. Choose one for each, then finish.`);
			await raiseRevision(tx, marking.id, { finishedAt: new Date() });
			await audit.record(tx, {
				actorId: act.viewer.id,
				courseId: await courseOfMarking(tx, marking.id),
				action: 'marking.finish',
				subjectKind: 'marking',
				subjectId: marking.id
			});
		}
		const state = await stateOf(tx, marking.id);
		return { marking: state, next: await nextAfter(tx, act, marking, state.alias) };
	});
}

/** Takes a finished marking up again. Errors: 'conflict' once it is returned. */
export async function reopenMarking(act: Act, input: { marking: string }): Promise<MarkingState> {
	return transact(act.repeatable, async (tx) => {
		const marking = await lockMarking(tx, act, 'marking.change', input.marking);
		if (!marking.finishedAt) return stateOf(tx, marking.id);
		if (await isReturned(tx, marking.id))
			throw conflict('Returned to its author. Only the instructor can take that back.');
		requireRevision(act, marking);
		await raiseRevision(tx, marking.id, { finishedAt: null });
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: await courseOfMarking(tx, marking.id),
			action: 'marking.reopen',
			subjectKind: 'marking',
			subjectId: marking.id
		});
		return stateOf(tx, marking.id);
	});
}
