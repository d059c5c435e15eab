import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { evaluate } from '$lib/worksheets';
import { exactLine } from './exact-line';
import { readingsFrom, water } from './vaporization-of-water';

/** Molar gas constant, CODATA 2018, as the worksheet states it. */
const gasConstant = 8.314462618;

/** Agreement to this many significant digits. */
function expectDigits(value: number | undefined, expected: number, digits: number): void {
	expect(Math.abs((value ?? NaN) / expected - 1)).toBeLessThan(0.5 * 10 ** -digits);
}

/**
 * Saturation of water from 0 to 100 degC. Computed with Debian python3-iapws 1.5.3-1 from IAPWS-95 (Wagner and Pruss
 * 2002; IAPWS R6-95(2018)); numbers only.
 */
const saturation = readFileSync(new URL('data/water_saturation_iapws95.csv', import.meta.url), 'utf8')
	.split('\n')
	.filter((line) => /^\d/.test(line))
	.map((line) => line.split(','))
	.map(
		([
			kelvins = '',
			celsius = '',
			kilopascals = '',
			millimetres = '',
			,
			,
			enthalpy = '',
			slopeEnthalpy = '',
			compressibility = ''
		]) => ({
			kelvins: Number(kelvins),
			celsius,
			kilopascals: Number(kilopascals),
			millimetres,
			enthalpy: Number(enthalpy),
			slopeEnthalpy: Number(slopeEnthalpy),
			compressibility: Number(compressibility)
		})
	);
const tenTemperatures = saturation.filter(({ celsius }) =>
	['55', '60', '65', '70', '75', '80', '85', '90', '95', '100'].includes(celsius)
);

describe('saturation pressures of water at ten temperatures', () => {
	// the header's unit is millimetres of mercury, the column's torr: the file is converted on the way in
	const csv = [
		't / °C;p / mmHg',
		...tenTemperatures.map(({ celsius, millimetres }) => `${celsius};${millimetres}`)
	].join('\n');
	const readings = readingsFrom(csv);
	const evaluation = evaluate(water, readings);
	const rows = readings.tables['readings'] ?? [];

	it('takes all ten, converted to within their digits', () => {
		expect(rows).toHaveLength(10);
		rows.forEach((row, i) => {
			const kilopascals = (Number(row.cells['p']) * 101.325) / 760;
			expectDigits(kilopascals, tenTemperatures[i]?.kilopascals ?? NaN, 6);
		});
	});

	// the same doubles' worth of data by another road: Math.log and one division, then exact rational least squares
	const x = rows.map((row) => 1 / (Number(row.cells['t']) + 273.15));
	const y = rows.map((row) => Math.log((Number(row.cells['p']) * 101325) / 760));
	const line = exactLine(x, y);

	it('agrees with an independent least squares to ten digits', () => {
		const { slope, intercept, H_vap: enthalpy, T_b: boiling } = evaluation.quantities;
		expectDigits(slope?.value, line.slope, 10);
		expectDigits(intercept?.value, line.intercept, 10);
		expectDigits(enthalpy?.value, (-gasConstant * line.slope) / 1000, 10);
		expectDigits(boiling?.value, line.slope / (Math.log(101325) - line.intercept), 10);
	});

	it('has the scatter and its share of the budget from the same least squares', () => {
		const fit = evaluation.fits['line'];
		expectDigits(fit?.residualStandardDeviation ?? NaN, Math.sqrt(line.residualVariance), 7);
		const part = (name: string) =>
			evaluation.quantities[name]?.budget.find(({ source }) => source === 'line:scatter')?.contribution;
		expectDigits(part('slope'), Math.sqrt(line.slopeVariance), 7);
		expectDigits(part('intercept'), Math.sqrt(line.interceptVariance), 7);
	});

	it('lies where the local slopes of the saturation curve say, above the calorimetric value by the vapour’s non-ideality', () => {
		const enthalpy = evaluation.quantities['H_vap']?.value ?? NaN;
		const slopes = tenTemperatures.map(({ slopeEnthalpy }) => slopeEnthalpy);
		expect(enthalpy).toBeGreaterThan(Math.min(...slopes));
		expect(enthalpy).toBeLessThan(Math.max(...slopes));
		const reference = evaluation.comparisons['H_vap']?.reference.value ?? NaN;
		expect(enthalpy - reference).toBeGreaterThan(0.3);
		expect(enthalpy - reference).toBeLessThan(0.8);
	});

	it('compares with the calorimetric enthalpy at the mean temperature', () => {
		const mean = evaluation.quantities['T_h']?.value ?? NaN;
		expectDigits(mean, 10 / x.reduce((sum, each) => sum + each, 0), 12);
		const below = saturation.filter(({ kelvins }) => kelvins <= mean).at(-1);
		const above = saturation.find(({ kelvins }) => kelvins > mean);
		if (!below || !above) throw new Error('The mean temperature is outside the table.');
		const share = (mean - below.kelvins) / (above.kelvins - below.kelvins);
		expect(evaluation.comparisons['H_vap']?.reference.value).toBeCloseTo(
			below.enthalpy + share * (above.enthalpy - below.enthalpy),
			10
		);
	});

	it('quotes the same enthalpies in the worksheet as the table', () => {
		const points = water.comparisons[0]?.reference?.interpolate?.points ?? [];
		expect(points.length).toBe(13);
		for (const { at, value } of points)
			expect(saturation.find(({ kelvins }) => kelvins === at)?.enthalpy).toBe(value);
	});
});

describe('ten equal steps from 400 to 760 torr', () => {
	/** Boiling temperatures in degC, from IAPWS-95 saturation pressures, rounded to 0.01 K. */
	const boiling = ['82.93', '85.35', '87.59', '89.68', '91.64', '93.48', '95.23', '96.89', '98.47', '99.97'];
	const csv = ['t,p', ...boiling.map((t, i) => `${t},${400 + 40 * i}`)].join('\n');
	const evaluation = evaluate(water, readingsFrom(csv));

	it('gives an effective enthalpy of 41.595 kJ/mol and a boiling point of 99.96 degC', () => {
		// 41.595 from unrounded temperatures; rounding to 0.01 K moves it in the third decimal
		expect(evaluation.quantities['H_vap']?.value).toBeCloseTo(41.595, 2);
		expect((evaluation.quantities['T_b']?.value ?? NaN) - 273.15).toBeCloseTo(99.96, 2);
	});

	it('stands 0.57 kJ/mol, 1.4 %, above the calorimetric 41.02 at 365.2 K', () => {
		const comparison = evaluation.comparisons['H_vap'];
		expect(evaluation.quantities['T_h']?.value).toBeCloseTo(365.2, 1);
		expect(comparison?.reference.value).toBeCloseTo(41.02, 2);
		expect(comparison?.difference).toBeCloseTo(0.57, 1);
		expect((comparison?.difference ?? NaN) / (comparison?.reference.value ?? NaN)).toBeCloseTo(0.014, 3);
		// what is left after the ideal-gas factor Z = 0.987 is below 0.1 kJ/mol
		expect((evaluation.quantities['H_vap']?.value ?? NaN) * 0.987).toBeCloseTo(41.02, 1);
	});

	it('moves as a systematic deviation should', () => {
		const shifted = (t: number, p: number) => {
			const rows = boiling.map((each, i) => `${(Number(each) + t).toFixed(2)},${400 + 40 * i + p}`);
			return evaluate(water, readingsFrom(['t,p', ...rows].join('\n'))).quantities;
		};
		const value = (quantities: typeof evaluation.quantities, name: string) => quantities[name]?.value ?? NaN;
		const change = (name: string, t: number, p: number) =>
			value(shifted(t, p), name) - value(evaluation.quantities, name);
		expect(change('H_vap', 0, 10)).toBeCloseTo(-0.75, 2);
		expect(change('T_b', 0, 10)).toBeCloseTo(-0.36, 2);
		expect(change('H_vap', 0.3, 0)).toBeCloseTo(0.07, 2);
		expect(change('T_b', 0.3, 0)).toBeCloseTo(0.3, 2);
	});
});

describe('the simulation behind the example', () => {
	it('boils at the published points', async () => {
		const { saturationPressure, boilingTemperature } =
			(await import('../../templates/vaporization-of-water/simulate.mjs')) as {
				saturationPressure: (kelvins: number) => number;
				boilingTemperature: (pascals: number) => number;
			};
		// IAPWS SR1-86(1992), table 1: 611.657 Pa at 273.16 K, 101325 Pa at 373.1243 K
		expect(saturationPressure(273.16)).toBeCloseTo(611.657, 2);
		expect(boilingTemperature(101325)).toBeCloseTo(373.1243, 4);
		for (const { kelvins, kilopascals } of saturation)
			expect(saturationPressure(kelvins) / (1000 * kilopascals)).toBeCloseTo(1, 3);
	});
});
