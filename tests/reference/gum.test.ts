import { describe, expect, it } from 'vitest';
import {
	add,
	budget,
	combinedUncertainty,
	correlated,
	correlation,
	cosine,
	covarianceFrom,
	covarianceOfMeans,
	coverageFactor,
	divide,
	exactly,
	mean,
	multiply,
	parseUnit,
	plainNumber,
	sine,
	squareRoot,
	standardDeviation,
	standardUncertainty,
	subtract,
	sum,
	toldIn,
	valueIn,
	withDeviations,
	type Component,
	type Quantity
} from '$lib/quantities';
import { input, rectangular, withComponents } from './uncertain-inputs';

const none = plainNumber(NaN);

describe('GUM (JCGM 100:2008) H.1, end gauge', () => {
	// l = ls + d - ls (d_alpha theta + alpha_s d_theta); H.1.3 and table H.1
	const ls = input(50000623, 25, { unit: 'nm', label: 'ls', degreesOfFreedom: 18 });
	const d = withComponents(215, [['repeated', 5.8, 24], ['comparator, random', 3.9, 5], ['comparator, systematic', 6.7, 8]], 'nm'); // prettier-ignore
	const alpha = input(11.5e-6, rectangular(2e-6), { unit: '1/K', label: 'alpha' });
	const theta = withComponents(
		-0.1,
		[
			['mean', 0.2],
			['cycle', 0.35]
		],
		'K'
	);
	const dAlpha = input(0, rectangular(1e-6), { unit: '1/K', label: 'd_alpha', degreesOfFreedom: 50 });
	const dTheta = input(0, rectangular(0.05), { unit: 'K', label: 'd_theta', degreesOfFreedom: 2 });
	const length = subtract(add(ls, d), multiply(ls, add(multiply(dAlpha, theta), multiply(alpha, dTheta))));
	const nanometres = (size: number) => size * 1e9;

	it('gives the published difference of the gauges', () => {
		const { standard, degreesOfFreedom } = combinedUncertainty(d);
		expect(nanometres(standard)).toBeCloseTo(9.7, 1);
		// printed 25.6, from u(d) rounded to 9.7
		expect(degreesOfFreedom).toBeCloseTo(25.45, 2);
	});

	it('gives the published length, uncertainty and contributions', () => {
		expect(valueIn(length)).toBeCloseTo(50000838, 6);
		expect(Math.round(nanometres(standardUncertainty(length)))).toBe(32);
		const contributions = Object.fromEntries(
			budget(length).map(({ component, contribution }) => [component.label, nanometres(contribution)])
		);
		expect(contributions.ls).toBeCloseTo(25, 6);
		expect(contributions.d_alpha).toBeCloseTo(2.9, 1);
		expect(contributions.d_theta).toBeCloseTo(16.6, 1);
		// first derivatives towards alpha_s and theta are zero at these values
		expect(contributions.alpha ?? 0).toBe(0);
		expect(contributions.mean ?? 0).toBe(0);
	});

	it('gives the published effective degrees of freedom and expanded uncertainty', () => {
		const { standard, degreesOfFreedom } = combinedUncertainty(length);
		// three components of d instead of one with 25.6: 16.7, which the GUM cuts to 16
		expect(Math.floor(degreesOfFreedom)).toBe(16);
		expect(coverageFactor(0.99, 16)).toBeCloseTo(2.92, 2);
		// the GUM multiplies the rounded 32; unrounded it is 92.5
		expect(Math.round(Math.round(nanometres(standard)) * coverageFactor(0.99, 16))).toBe(93);
		expect(nanometres(standard) * coverageFactor(0.99, 16)).toBeCloseTo(92.5, 1);
	});
});

describe('GUM (JCGM 100:2008) H.2, resistance and reactance', () => {
	// table H.2, five simultaneous observations
	const volts = [5.007, 4.994, 5.005, 4.99, 4.999];
	const amperes = [19.663, 19.639, 19.64, 19.685, 19.678].map((each) => each / 1000);
	const phases = [1.0456, 1.0438, 1.0468, 1.0428, 1.0433];
	const series = [volts, amperes, phases];
	const average = (values: readonly number[]) => values.reduce((a, b) => a + b, 0) / values.length;
	const component: Component = { id: 'set', label: 'Five sets', scope: 'run', degreesOfFreedom: 4 };
	const units = ['V', 'A', 'rad'].map((unit) => parseUnit(unit));
	const exact = series.map((values, i) => exactly(average(values), units[i]));

	function impedance(inputs: readonly Quantity[]) {
		const [voltage = none, current = none, phase = none] = inputs;
		const z = divide(voltage, current);
		return { r: multiply(z, cosine(phase)), x: multiply(z, sine(phase)), z };
	}

	it('has the published means, uncertainties and correlations of the inputs', () => {
		const [v = none, i = none, phi = none] = correlated(exact, covarianceOfMeans(series), component);
		expect([v.value, i.value * 1000, phi.value].map((each) => Number(each.toFixed(5)))).toEqual([
			4.999, 19.661, 1.04446
		]);
		expect(standardUncertainty(v)).toBeCloseTo(0.0032, 4);
		expect(standardUncertainty(i) * 1000).toBeCloseTo(0.0095, 4);
		expect(standardUncertainty(phi)).toBeCloseTo(0.00075, 5);
		expect(correlation(v, i)).toBeCloseTo(-0.36, 2);
		expect(correlation(v, phi)).toBeCloseTo(0.86, 2);
		expect(correlation(i, phi)).toBeCloseTo(-0.65, 2);
	});

	it('gives the published results from the covariances of the readings, with four degrees of freedom', () => {
		const { r, x, z } = impedance(correlated(exact, covarianceOfMeans(series), component));
		expect(valueIn(toldIn(r, parseUnit('ohm')))).toBeCloseTo(127.732, 3);
		expect(x.value).toBeCloseTo(219.847, 3);
		expect(z.value).toBeCloseTo(254.26, 3);
		expect(standardUncertainty(r)).toBeCloseTo(0.071, 3);
		// printed 0.295; unrounded 0.29558
		expect(standardUncertainty(x)).toBeCloseTo(0.29558168, 8);
		expect(standardUncertainty(z)).toBeCloseTo(0.236, 3);
		expect(correlation(r, x)).toBeCloseTo(-0.588, 3);
		expect(correlation(r, z)).toBeCloseTo(-0.485, 3);
		// printed 0.993 from the other route; unrounded 0.99251
		expect(correlation(x, z)).toBeCloseTo(0.99251165, 8);
		for (const each of [r, x, z]) expect(combinedUncertainty(each).degreesOfFreedom).toBe(4);
	});

	it('gives 0.0700 for R from the rounded uncertainties and correlations', () => {
		const covariances = covarianceFrom(
			[0.0032, 0.0095e-3, 0.00075],
			[[1, -0.36, 0.86], [-0.36, 1, -0.65], [0.86, -0.65, 1]] // prettier-ignore
		);
		const { r, x, z } = impedance(correlated(exact, covariances, component));
		expect(standardUncertainty(r)).toBeCloseTo(0.07, 4);
		expect(standardUncertainty(r)).toBeCloseTo(0.06997873, 5);
		expect(standardUncertainty(x)).toBeCloseTo(0.29571683, 5);
		expect(standardUncertainty(z)).toBeCloseTo(0.23660297, 5);
	});

	it('gives the published results set by set, the second approach', () => {
		const sets = volts.map((v, k) => impedance([v, amperes[k] ?? NaN, phases[k] ?? NaN].map((each, i) => exactly(each, units[i])))); // prettier-ignore
		const of = (name: 'r' | 'x' | 'z') => sets.map((set) => set[name].value);
		expect(of('r').map((each) => each.toFixed(3))).toEqual([
			'127.672',
			'127.892',
			'127.506',
			'127.710',
			'127.877'
		]);
		const rows = [of('r'), of('x'), of('z')];
		const [r = none, x = none, z = none] = correlated(rows.map((row) => plainNumber(average(row))), covarianceOfMeans(rows), component); // prettier-ignore
		expect([r, x, z].map(({ value }) => value.toFixed(3))).toEqual(['127.732', '219.847', '254.260']);
		expect(standardUncertainty(r)).toBeCloseTo(0.071, 3);
		expect(standardUncertainty(x)).toBeCloseTo(0.295, 3);
		expect(standardUncertainty(z)).toBeCloseTo(0.236, 3);
		expect(correlation(r, x)).toBeCloseTo(-0.588, 3);
		expect(correlation(r, z)).toBeCloseTo(-0.485, 3);
		expect(correlation(x, z)).toBeCloseTo(0.993, 3);
	});

	it('goes wrong where the correlations are ignored', () => {
		// from the rounded uncertainties again
		const alone = [[1, 0, 0], [0, 1, 0], [0, 0, 1]]; // prettier-ignore
		const { r } = impedance(
			correlated(exact, covarianceFrom([0.0032, 0.0095e-3, 0.00075], alone), component)
		);
		expect(standardUncertainty(r)).toBeCloseTo(0.19411789, 6);
	});
});

describe('GUM (JCGM 100:2008) H.5, Zener voltage standard', () => {
	// table H.9: ten daily means of five readings, and their standard deviations in microvolts
	const days = [
		10.000172, 10.000116, 10.000013, 10.000144, 10.000106, 10.000031, 10.00006, 10.000125, 10.000163,
		10.000041
	];
	const deviations = [60, 77, 111, 101, 67, 93, 80, 73, 88, 86];
	const means = days.map((day) => exactly(day, parseUnit('V')));
	const between = standardDeviation(means).value * 1e6;
	const pooled = squareRoot(mean(deviations.map((s) => plainNumber(s * s)))).value;

	it('has the published mean and standard deviations, within and between days', () => {
		expect(mean(means).value).toBeCloseTo(10.000097, 6);
		expect(between).toBeCloseTo(57, 0);
		expect(pooled).toBeCloseTo(85, 0);
		// F = K s(day means)^2 / s^2; printed 2.25 from the rounded 57 and 85
		expect((5 * Math.round(between) ** 2) / Math.round(pooled) ** 2).toBeCloseTo(2.25, 2);
		expect((5 * between ** 2) / pooled ** 2).toBeCloseTo(2.2615, 4);
		expect(Math.sqrt(between ** 2 - pooled ** 2 / 5)).toBeCloseTo(42.6386, 3);
	});

	it('has the published uncertainty of the mean with and without an effect of the day', () => {
		const scatter = (u: number, degreesOfFreedom: number) =>
			combinedUncertainty(
				withDeviations(mean(means), [
					[{ component: { id: 's', label: 's', scope: 'run', degreesOfFreedom } }, u]
				])
			);
		expect(scatter(between / Math.sqrt(10), 9)).toMatchObject({ degreesOfFreedom: 9 });
		expect(scatter(between / Math.sqrt(10), 9).standard).toBeCloseTo(18, 0);
		// all fifty readings as one sample, 49 degrees of freedom
		const all = Math.sqrt((9 * 5 * between ** 2 + 40 * pooled ** 2) / 49);
		expect(scatter(all / Math.sqrt(50), 49).standard).toBeCloseTo(13, 0);
	});
});

describe('sums that share everything', () => {
	it('GUM 5.2.2, ten resistors calibrated against one: u(sum) is the sum of the u', () => {
		const standard = input(1000, 0.1, { unit: 'ohm' });
		const resistors = Array.from({ length: 10 }, () => multiply(plainNumber(1), standard));
		expect(valueIn(sum(resistors))).toBe(10_000);
		expect(standardUncertainty(sum(resistors))).toBeCloseTo(1, 12);
	});
});
