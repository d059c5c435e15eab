import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { recompute } from '../../src/lib/server/reports/recompute';
import type { Snapshot } from '../../src/lib/server/reports/manifest';
import {
	engineVersion,
	evaluationFromStored,
	fromStored,
	type StoredEvaluation,
	type StoredWorksheet
} from '$lib/worksheets';

type Golden = Pick<Snapshot, 'engine' | 'worksheet' | 'readings' | 'evaluation'>;
const folder = new URL('../golden/', import.meta.url).pathname;
const goldens = readdirSync(folder)
	.filter((name) => name.endsWith('.json'))
	.map((name): [string, Golden] => {
		const { worksheet, evaluation, ...rest } = JSON.parse(readFileSync(folder + name, 'utf8')) as Omit<
			Golden,
			'worksheet' | 'evaluation'
		> & { worksheet: StoredWorksheet; evaluation: StoredEvaluation };
		return [
			name,
			{ ...rest, worksheet: fromStored(worksheet), evaluation: evaluationFromStored(evaluation) }
		];
	});

describe('golden snapshots', () => {
	it('has one of the present engine: a change of any number needs a new version and a new golden', () => {
		expect(goldens.map(([, { engine }]) => engine)).toContain(engineVersion);
	});

	it.each(goldens)('%s recomputes to what it said', (_name, golden) => {
		const again = recompute(golden);
		expect(again.sameEngine).toBe(golden.engine === engineVersion);
		if (again.sameEngine) {
			expect(again.evaluation).toEqual(golden.evaluation);
			expect(again.identical).toBe(true);
			expect(again.differences).toEqual([]);
		}
		// Whatever the engine: the values are the same measurement, well within its uncertainty.
		for (const [name, before] of Object.entries(golden.evaluation.quantities)) {
			const now = again.evaluation.quantities[name];
			expect(now, name).toBeDefined();
			if (!now) continue;
			const within = (before.standardUncertainty ?? 0) / 100 + Math.abs(before.value) * 1e-9;
			expect(Math.abs(now.value - before.value), name).toBeLessThanOrEqual(within);
		}
	});
});
