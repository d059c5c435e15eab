import { describe, expect, it } from 'vitest';
import { coverageFactor, plainNumber, standardUncertainty } from '$lib/quantities';
import {
	fitLine,
	fitLinear,
	inverseInterval,
	inversePrediction,
	lineAt,
	nextReadingAt,
	type LineOptions
} from '$lib/regression';
import { exactLine } from './exact-line';

const scatter: LineOptions = { id: 'line', scatterLabel: 'Scatter', policy: 'scatter', weights: 'equal' };

describe('Eurachem/CITAC CG4 (QUAM:2012) A5, cadmium released from ceramic ware: calibration line', () => {
	// absorbances of five standards (mg/L), three readings each; both readings of the sample
	const c = [0.1, 0.1, 0.1, 0.3, 0.3, 0.3, 0.5, 0.5, 0.5, 0.7, 0.7, 0.7, 0.9, 0.9, 0.9];
	const a = [
		0.028, 0.029, 0.029, 0.084, 0.083, 0.081, 0.135, 0.131, 0.133, 0.18, 0.181, 0.183, 0.215, 0.23, 0.216
	];
	const sample = [0.0712, 0.0716];
	const fit = fitLine(c.map(plainNumber), a.map(plainNumber), scatter);

	it('gives the published line', () => {
		expect(fit.intercept.value).toBeCloseTo(0.0087, 4);
		expect(standardUncertainty(fit.intercept)).toBeCloseTo(0.0029, 4);
		expect(fit.slope.value).toBeCloseTo(0.241, 3);
		expect(standardUncertainty(fit.slope)).toBeCloseTo(0.005, 3);
		const r = fit.covariance / (standardUncertainty(fit.slope) * standardUncertainty(fit.intercept));
		// -0.870388, of which the guide prints five digits without rounding
		expect(Math.trunc(r * 1e5) / 1e5).toBe(-0.87038);
	});

	it('reads the concentration of the sample off it with the published uncertainty', () => {
		const height = plainNumber(((sample[0] ?? 0) + (sample[1] ?? 0)) / 2);
		const c0 = inversePrediction(fit, height, { newReadings: 2 });
		expect(c0.value).toBeCloseTo(0.26, 2);
		expect(standardUncertainty(c0)).toBeCloseTo(0.018, 3);
		// the formula printed in A5: S/B1 sqrt(1/p + 1/n + (c0 - mean c)2/Sxx)
		const s = fit.residualStandardDeviation ?? NaN;
		const root = Math.sqrt(1 / 2 + 1 / 15 + (c0.value - 0.5) ** 2 / fit.spreadX);
		expect(standardUncertainty(c0)).toBeCloseTo((s / fit.slope.value) * root, 12);
	});

	it('bounds it by an interval whose ends lie on the expanded band', () => {
		const height = plainNumber(0.0714);
		const ends = inverseInterval(fit, height, 0.95);
		const at = lineAt(fit);
		const factor = coverageFactor(0.95, 13);
		expect(at(ends?.low ?? NaN).value + factor * at(ends?.low ?? NaN).standard).toBeCloseTo(0.0714, 12);
		expect(at(ends?.high ?? NaN).value - factor * at(ends?.high ?? NaN).standard).toBeCloseTo(0.0714, 12);
		const flat = fitLine([1, 2, 3, 4].map(plainNumber), [1, 3, 2, 2.1].map(plainNumber), scatter);
		expect(inverseInterval(flat, plainNumber(2), 0.95)).toBeNull();
	});
});

describe("NBS Handbook 91 (Natrella 1963) 5-4.1, Young's modulus against temperature", () => {
	const x = [30, 100, 200, 300, 400, 500, 600, 700, 800, 900, 1000, 1100, 1200, 1300, 1400, 1500];
	const y = [4642, 4612, 4565, 4513, 4476, 4433, 4389, 4347, 4303, 4251, 4201, 4140, 4100, 4073, 4024, 3999];
	const fit = fitLine(x.map(plainNumber), y.map(plainNumber), scatter);

	it('gives the published line, variances and scatter', () => {
		expect(fit.slope.value).toBeCloseTo(-0.44985482, 8);
		expect(fit.intercept.value).toBeCloseTo(4654.9846, 4);
		// 2.56490455e-5, of which the handbook prints eight digits without rounding
		expect(Math.trunc(standardUncertainty(fit.slope) ** 2 * 1e12)).toBe(25_649_045);
		// 19.879453 in exact arithmetic; the handbook's desk calculation prints 19.879452
		expect(standardUncertainty(fit.intercept) ** 2).toBeCloseTo(19.879452, 5);
		expect(standardUncertainty(fit.intercept) ** 2).toBeCloseTo(exactLine(x, y).interceptVariance, 10);
		// cut likewise: 9.27761764
		expect(Math.trunc((fit.residualStandardDeviation ?? NaN) * 1e6)).toBe(9_277_617);
	});

	it('gives the published variances of the line and of a next reading', () => {
		expect(lineAt(fit)(1200).standard ** 2).toBeCloseTo(10.53, 2);
		expect(nextReadingAt(fit)(750).standard ** 2).toBeCloseTo(91.45, 1);
		const general = fitLinear([x.map(() => plainNumber(1)), x.map(plainNumber)], y.map(plainNumber), scatter); // prettier-ignore
		expect(general.at([1, 1200]).standard).toBeCloseTo(lineAt(fit)(1200).standard, 10);
		expect(general.nextReading([1, 750]).standard).toBeCloseTo(nextReadingAt(fit)(750).standard, 10);
	});
});
