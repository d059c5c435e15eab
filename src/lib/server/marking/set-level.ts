import { and, eq, sql } from 'drizzle-orm';
import type { MarkingState } from '$lib/contracts/marking';
import * as audit from '../audit';
import type { Act } from '../auth';
import { schema, transact, type Transaction } from '../db';
import { notFound, unprocessable } from '../errors';
import { levelsOf, stateOf } from './state';
import {
	courseOfMarking,
	lockMarking,
	raiseRevision,
	requireOpen,
	requireRevision,
	type MarkingRow
} from './steps';

const { criteria, levels, scoreEvents } = schema;

/** Points of a level of one of the marking's own criteria; null for a level taken away. */
async function pointsOf(
	tx: Transaction,
	marking: MarkingRow,
	criterion: string,
	level: number | null
): Promise<number | null> {
	const [known] = await tx
		.select({ id: criteria.id })
		.from(criteria)
		.where(and(eq(criteria.id, criterion), eq(criteria.rubricVersionId, marking.rubricVersionId)));
	if (!known) throw notFound();
	if (level === null) return null;
	const [row] = await tx
		.select({ points: levels.pointsHundredths })
		.from(levels)
		.where(and(eq(levels.criterionId, criterion), eq(levels.level, level)));
	if (!row) throw unprocessable('This criterion has no such level.', { level: 'Choose one of its levels.' });
	return row.points;
}

/**
 * Sets a criterion's level, or takes it away with null. Every change is a further event; none is overwritten.
 * What already holds is not written again, so that a client may repeat an unanswered write whatever revision it names.
 */
export async function setLevel(
	act: Act,
	input: { marking: string; criterion: string; level: number | null; reason: string }
): Promise<MarkingState> {
	return transact(act.repeatable, async (tx) => {
		const marking = await lockMarking(tx, act, 'marking.change', input.marking);
		const points = await pointsOf(tx, marking, input.criterion, input.level);
		const inForce = (await levelsOf(tx, marking.id)).find((row) => row.criterion === input.criterion);
		if ((inForce?.level ?? null) === input.level) return stateOf(tx, marking.id);
		await requireOpen(tx, marking);
		requireRevision(act, marking);
		const [last] = await tx.execute<{ n: number | null }>(
			sql`select max(n) as n from score_events where marking_id = ${marking.id} and criterion_id = ${input.criterion}`
		);
		await tx.insert(scoreEvents).values({
			markingId: marking.id,
			rubricVersionId: marking.rubricVersionId,
			criterionId: input.criterion,
			n: (last?.n ?? 0) + 1,
			level: input.level,
			pointsHundredths: points,
			reason: input.reason,
			byId: act.viewer.id
		});
		await raiseRevision(tx, marking.id);
		await audit.record(tx, {
			actorId: act.viewer.id,
			courseId: await courseOfMarking(tx, marking.id),
			action: 'marking.setLevel',
			subjectKind: 'marking',
			subjectId: marking.id,
			detail: { criterion: input.criterion, from: inForce?.level ?? null, to: input.level }
		});
		return stateOf(tx, marking.id);
	});
}
