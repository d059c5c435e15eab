import { compareResults, shownResults, type ResultDifference } from '$lib/reports';
import { engineVersion, evaluate, type Evaluation } from '$lib/worksheets';
import { canonicalPart, hex, sha256 } from './canonical';
import type { Snapshot } from './manifest';

export interface Recomputed {
	/** of the arithmetic that computed now */
	engine: string;
	/** the arithmetic that was in force at hand-in: anything but identical results is a fault */
	sameEngine: boolean;
	/** down to the last bit of the last table cell */
	identical: boolean;
	/** values that a report can state and that differ; a newer engine is compared, never written over the old */
	differences: ResultDifference[];
	evaluation: Evaluation;
}

/** Works up a snapshot's readings again and compares with what was stored. */
export function recompute(
	snapshot: Pick<Snapshot, 'engine' | 'worksheet' | 'readings' | 'evaluation'>
): Recomputed {
	const evaluation = evaluate(snapshot.worksheet, snapshot.readings);
	return {
		engine: engineVersion,
		sameEngine: snapshot.engine === engineVersion,
		identical: digest(evaluation) === digest(snapshot.evaluation),
		differences: compareResults(shownResults(snapshot.evaluation), shownResults(evaluation)),
		evaluation
	};
}

const digest = (evaluation: Evaluation): string => hex(sha256(canonicalPart(evaluation)));
