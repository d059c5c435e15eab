import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import {
	evaluate,
	evaluationFromStored,
	fromStored,
	type Readings,
	type StoredEvaluation,
	type StoredWorksheet
} from '$lib/worksheets';
import { water } from './worksheets-fixture';

interface Golden {
	worksheet: StoredWorksheet;
	readings: Readings;
	evaluation: StoredEvaluation;
}
const golden = JSON.parse(
	readFileSync(new URL('../golden/vaporization-1.0.0.json', import.meta.url), 'utf8')
) as Golden;

describe('a worksheet stored by the first version', () => {
	const worksheet = fromStored(golden.worksheet);

	it('gives the very doubles it gave then', () => {
		const { quantities, comparisons } = evaluate(worksheet, golden.readings);
		const numbers = (of: Record<string, { value: number; standardUncertainty: number | null }>) =>
			Object.fromEntries(
				Object.entries(of).map(([name, { value, standardUncertainty }]) => [
					name,
					`${value} ${standardUncertainty}`
				])
			);
		expect(numbers(quantities)).toEqual(numbers(golden.evaluation.quantities));
		for (const [name, before] of Object.entries(golden.evaluation.comparisons))
			expect(comparisons[name]?.sentence).toBe(before.sentence);
	});

	it('has a mean over its table, and every step says what it rests on', () => {
		expect(worksheet.results.find(({ name }) => name === 'T_h')?.formula).toMatchObject({
			right: { op: 'over', function: 'mean', table: 'readings', where: null }
		});
		expect(worksheet.order.filter((step) => step.kind === 'column' && !step.local)).toEqual([]);
		expect(worksheet.fits[0]?.parameters.map(({ name }) => name)).toEqual(['slope', 'intercept']);
	});

	it('changes nothing of one in the present form', () => {
		expect(fromStored(water)).toEqual(water);
	});
});

describe('an evaluation stored by the first version', () => {
	const evaluation = evaluationFromStored(golden.evaluation);

	it('has its fitted parameters in a list and the line as a curve', () => {
		expect(evaluation.fits.line?.parameters.map(({ value }) => value)).toEqual([
			-5040.533621588206, 25.02534323719599
		]);
		expect(evaluation.fits.line?.covariance).toEqual([
			[29.530700902439204 ** 2, -2.342805150179481],
			[-2.342805150179481, 0.07968976227702473 ** 2]
		]);
		const line = golden.evaluation.figures.line?.line;
		const [first] = evaluation.figures.line?.series[0]?.curve ?? [];
		expect(first?.y).toBeCloseTo((line?.intercept ?? NaN) + (line?.slope ?? NaN) * (line?.from ?? NaN), 12);
	});
});
