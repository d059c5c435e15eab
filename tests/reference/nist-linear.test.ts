import { afterAll, describe, expect, it } from 'vitest';
import { plainNumber, standardUncertainty } from '$lib/quantities';
import { fitLine, fitLinear, fitPolynomial, type FitOptions, type ModelFit } from '$lib/regression';
import { columnsOf, digits, nistSets, Worst } from './nist';

interface LinearSet {
	model: string;
	columns: string[];
	parameters: { name: string; estimate: string; sd: string }[];
	residual_sd: string;
	r_squared: string;
	residual_ss: string;
	data: string[];
}

const options: FitOptions = { id: 'nist', scatterLabel: 'Scatter', policy: 'scatter', weights: 'equal' };
const sets = nistSets<LinearSet>('linear');
const worst = new Worst();

function fitOf(set: LinearSet): ModelFit {
	const columns = columnsOf(set.columns, set.data);
	const numbers = (name: string) => (columns[name] ?? []).map((text) => plainNumber(Number(text)));
	const [y, x] = [numbers('y'), numbers('x')];
	if (set.columns.length > 2) {
		const ones = y.map(() => plainNumber(1));
		return fitLinear([ones, ...set.columns.slice(1).map(numbers)], y, options);
	}
	if (set.parameters[0]?.name === 'B1') return fitLinear([x], y, options);
	return fitPolynomial(x, y, set.parameters.length - 1, options);
}

describe('NIST StRD, linear regression, all 11 sets', () => {
	it('are all there', () => {
		expect(Object.keys(sets)).toHaveLength(11);
	});

	it.each(Object.entries(sets))('%s to nine certified digits at least', (name, set) => {
		const fit = fitOf(set);
		expect(fit.parameters).toHaveLength(set.parameters.length);
		set.parameters.forEach(({ name: parameter, estimate, sd }, j) => {
			const quantity = fit.parameters[j] ?? plainNumber(NaN);
			const of = `${name} ${parameter}`;
			expect(worst.note('parameters', of, digits(quantity.value, estimate)), of).toBeGreaterThan(9);
			const spread = digits(standardUncertainty(quantity), sd);
			expect(worst.note('standard deviations', of, spread), `sd of ${of}`).toBeGreaterThan(9);
		});
		const residual = digits(fit.residualStandardDeviation ?? NaN, set.residual_sd);
		expect(worst.note('residual standard deviation', name, residual)).toBeGreaterThan(9);
		expect(fit.leverage.reduce((sum, each) => sum + each, 0)).toBeCloseTo(set.parameters.length, 9);
	});

	it.each(['Norris', 'NoInt1', 'NoInt2'])('%s as a straight line too', (name) => {
		const set = sets[name];
		if (!set) throw new Error(`No ${name}.`);
		const columns = columnsOf(set.columns, set.data);
		const numbers = (column: string) => (columns[column] ?? []).map((text) => plainNumber(Number(text)));
		const through = name === 'Norris' ? 'free' : 'origin';
		const fit = fitLine(numbers('x'), numbers('y'), { ...options, through });
		const told = through === 'free' ? [fit.intercept, fit.slope] : [fit.slope];
		set.parameters.forEach(({ estimate, sd }, j) => {
			const quantity = told[j] ?? plainNumber(NaN);
			expect(worst.note('straight line', name, digits(quantity.value, estimate))).toBeGreaterThan(9);
			expect(worst.note('straight line', name, digits(standardUncertainty(quantity), sd))).toBeGreaterThan(9);
		});
	});

	afterAll(() => worst.print('NIST StRD linear'));
});
