import { describe, expect, it } from 'vitest';
import { plainNumber, standardUncertainty } from '$lib/quantities';
import { fitLine, lineAt, type LineOptions } from '$lib/regression';
import { exactLine } from './exact-line';
import { columnsOf, digits, nistSets } from './nist';

const scatter: LineOptions = { id: 'line', scatterLabel: 'Scatter', policy: 'scatter', weights: 'equal' };

interface Certified {
	columns: string[];
	data: string[];
	parameters: { estimate: string; sd: string }[];
	residual_sd: string;
}

describe('NIST StRD, Norris', () => {
	const Norris = nistSets<Certified>('linear')['Norris'];
	if (!Norris) throw new Error('Norris is not there.');
	const columns = columnsOf(Norris.columns, Norris.data);
	const [x, y] = ['x', 'y'].map((name) => (columns[name] ?? []).map(Number)) as [number[], number[]];
	const fit = fitLine(x.map(plainNumber), y.map(plainNumber), scatter);
	const [intercept, slope] = Norris.parameters;

	it('meets at least nine certified digits', () => {
		expect(Norris.columns).toEqual(['y', 'x']);
		const worst = Math.min(
			digits(fit.slope.value, Number(slope?.estimate)),
			digits(fit.intercept.value, Number(intercept?.estimate)),
			digits(standardUncertainty(fit.slope), Number(slope?.sd)),
			digits(standardUncertainty(fit.intercept), Number(intercept?.sd)),
			digits(fit.residualStandardDeviation ?? NaN, Number(Norris.residual_sd))
		);
		expect(worst).toBeGreaterThan(9);
	});

	it('agrees with the exact rational solution, which meets the certified values too', () => {
		const exact = exactLine(x, y);
		expect(digits(exact.slope, Number(slope?.estimate))).toBeGreaterThan(14);
		expect(digits(exact.intercept, Number(intercept?.estimate))).toBeGreaterThan(14);
		expect(digits(Math.sqrt(exact.slopeVariance), Number(slope?.sd))).toBeGreaterThan(14);
		expect(digits(fit.slope.value, exact.slope)).toBeGreaterThan(14);
		expect(digits(fit.intercept.value, exact.intercept)).toBeGreaterThan(12);
	});
});

describe('GUM (JCGM 100:2008) H.3, calibration of a thermometer', () => {
	// readings of H.3, table H.6; b(t) = y1 + y2 (t - 20 degC)
	const t = [21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.01, 26.511];
	const b = [-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.16];
	const fit = fitLine(t.map((each) => plainNumber(each - 20)), b.map(plainNumber), scatter); // prettier-ignore

	it('gives the published parameters, standard deviations and degrees of freedom', () => {
		expect(fit.intercept.value).toBeCloseTo(-0.1712, 4);
		expect(standardUncertainty(fit.intercept)).toBeCloseTo(0.0029, 4);
		expect(fit.slope.value).toBeCloseTo(0.00218, 5);
		expect(standardUncertainty(fit.slope)).toBeCloseTo(0.00067, 5);
		expect(fit.residualStandardDeviation).toBeCloseTo(0.0035, 4);
		expect(fit.degreesOfFreedom).toBe(9);
	});

	it('predicts the correction at 30 degC with the published uncertainty', () => {
		const { value, standard, degreesOfFreedom } = lineAt(fit)(10);
		expect(value).toBeCloseTo(-0.1494, 4);
		expect(standard).toBeCloseTo(0.0041, 4);
		expect(degreesOfFreedom).toBe(9);
	});

	it('has the published correlation of slope and intercept', () => {
		let covariance = 0;
		for (const [source, part] of fit.slope.parts) covariance += part * (fit.intercept.parts.get(source) ?? 0);
		expect(covariance / (standardUncertainty(fit.slope) * standardUncertainty(fit.intercept))).toBeCloseTo(
			-0.93,
			2
		);
	});
});
