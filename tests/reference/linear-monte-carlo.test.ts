import { describe, expect, it } from 'vitest';
import {
	independent,
	monteCarlo,
	plainNumber,
	QuantityProblem,
	randomSource,
	standardUncertainty,
	type Quantity
} from '$lib/quantities';
import { evaluateFormula } from '../../src/lib/worksheets/formula';
import { parseFormula } from '../../src/lib/worksheets/formula-parser';
import { uncertain } from './oracle';
import { FormulaMaker, type RandomFormula } from './random-formulas';

/**
 * Where deviations are small against the bend of a formula, the scatter of its values over drawn inputs is what linear
 * propagation says. Uncertainties are a hundredth of those that the formulas come with; names that stand several times
 * are drawn once.
 */
const trials = 3000;
const share = 0.01;

function evaluator({ text, inputs }: RandomFormula): (values: readonly Quantity[]) => Quantity {
	const scope = {
		names: new Set(inputs.map(([name]) => name)),
		choices: new Set<string>(),
		tables: new Map(),
		table: null
	};
	const formula = parseFormula(text, scope);
	const at = new Map(inputs.map(([name], i) => [name, i]));
	const unreachable = () => {
		throw new Error('Nothing but names stands in these formulas.');
	};
	return (values) =>
		evaluateFormula(formula, {
			quantity: (leaf) => (leaf.op === 'name' && values[at.get(leaf.name) ?? -1]) || unreachable(),
			text: unreachable,
			given: unreachable,
			step: () => undefined
		});
}

/** null where some value of the inputs has no result */
function bothWays(
	formula: RandomFormula,
	seed: number
): { linear: number; drawn: number; curved: number } | null {
	const evaluate = evaluator(formula);
	try {
		const sized = (by: number) =>
			evaluate(formula.inputs.map(([name, value, u]) => uncertain(value, u * by, { component: { id: name, label: name, scope: 'reading', degreesOfFreedom: Infinity } }))); // prettier-ignore
		const here = sized(share);
		const sampler = independent(
			formula.inputs.map(([, mean, u]) => ({ shape: 'normal', mean, standard: u * share }))
		);
		const result = monteCarlo((values) => evaluate(values.map(plainNumber)).value, sampler, { seed, trials });
		// the mean moves by the second derivatives: how much of the uncertainty they are
		const curved = Math.abs(result.mean - here.value);
		return { linear: standardUncertainty(here), drawn: result.standardUncertainty, curved };
	} catch (cause) {
		if (cause instanceof QuantityProblem) return null;
		throw cause;
	}
}

describe('linear propagation against Monte Carlo', () => {
	it('agrees on random formulas', { timeout: 600_000 }, () => {
		const maker = new FormulaMaker(randomSource(20_260_312));
		let compared = 0;
		const apart: string[] = [];
		for (let i = 0; i < 400; i += 1) {
			const formula = maker.next();
			const found = bothWays(formula, i);
			// parts that cancel leave rounding; a formula that bends within its own deviations is not what is asked here
			if (!found || found.linear < 1e-9 || !(found.curved < 0.1 * found.linear)) continue;
			compared += 1;
			// five standard errors of a standard deviation from 3000 normal draws are 6.5 %
			if (!(Math.abs(found.drawn / found.linear - 1) < 0.065)) apart.push(`${formula.text} of ${JSON.stringify(formula.inputs)}: ${found.linear} and ${found.drawn}`); // prettier-ignore
		}
		console.log(`linear against Monte Carlo: ${compared} formulas of 400`);
		expect(apart).toEqual([]);
		expect(compared).toBeGreaterThan(200);
	});
});
