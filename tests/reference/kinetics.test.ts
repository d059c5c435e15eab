import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { plainNumber, standardUncertainty } from '$lib/quantities';
import { dual, fitNonlinear, type Model } from '$lib/regression';

const nothing = dual.constant(NaN);
/** Michaelis and Menten: Vm c / (K + c) */
const saturation: Model = ([vm = nothing, k = nothing], [c = nothing]) =>
	dual.divide(dual.multiply(vm, c), dual.add(k, c));

// R 4.2.2, datasets::Puromycin
const rows = readFileSync(new URL('data/puromycin_R.csv', import.meta.url), 'utf8')
	.split('\n')
	.filter((line) => /^[\d.]/.test(line))
	.map((line) => line.replaceAll('"', '').split(','));

// R 4.2.2, nls(rate ~ Vm * conc / (K + conc))
const fitted = {
	treated: { vm: 212.6835791, k: 0.06412102614, uVm: 6.9471463, uK: 0.0082809222, s: 10.933658, df: 10 },
	untreated: { vm: 160.2801249, k: 0.0477083062, uVm: 6.480251, uK: 0.0077818913, s: 9.773003, df: 9 }
};

describe('rate of an enzyme reaction with and without puromycin, beside nls of R 4.2.2', () => {
	it.each(Object.entries(fitted))('%s cells', (state, expected) => {
		const used = rows.filter((row) => row[2] === state);
		const fit = fitNonlinear(
			saturation,
			[used.map(([c]) => plainNumber(Number(c)))],
			used.map(([, rate]) => plainNumber(Number(rate))),
			[200, 0.1].map(plainNumber),
			{ id: 'rate', scatterLabel: 'Scatter', policy: 'scatter', weights: 'equal' }
		);
		const [vm = plainNumber(NaN), k = plainNumber(NaN)] = fit.parameters;
		// nls stops at a relative offset of 1e-5: its parameters are off by a few 1e-5 of their standard deviations
		expect(Math.abs(vm.value - expected.vm) / expected.uVm).toBeLessThan(5e-5);
		expect(Math.abs(k.value - expected.k) / expected.uK).toBeLessThan(5e-5);
		expect(standardUncertainty(vm) / expected.uVm).toBeCloseTo(1, 5);
		expect(standardUncertainty(k) / expected.uK).toBeCloseTo(1, 5);
		expect((fit.residualStandardDeviation ?? NaN) / expected.s).toBeCloseTo(1, 6);
		expect(fit.degreesOfFreedom).toBe(expected.df);
	});
});
