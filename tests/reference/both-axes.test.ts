import { describe, expect, it } from 'vitest';
import {
	combinedUncertainty,
	covariance,
	plainNumber,
	standardUncertainty,
	withDeviations,
	type Scope,
	type Source
} from '$lib/quantities';
import { fitBothAxes, fitLine, lineAt } from '$lib/regression';

const source = (scope: Scope = 'reading'): Source => ({
	component: { id: scope, label: scope, scope, degreesOfFreedom: Infinity }
});
const uncertain = (values: readonly number[], weights: readonly number[]) =>
	values.map((value, i) =>
		withDeviations(plainNumber(value), [[source(), 1 / Math.sqrt(weights[i] ?? NaN)]])
	);
const stated = { id: 'york', scatterLabel: 'Scatter', policy: 'stated' } as const;

// Pearson, Phil. Mag. 2 (1901) 559, with the weights (1/u2) of York, Can. J. Phys. 44 (1966) 1079
const x = [0, 0.9, 1.8, 2.6, 3.3, 4.4, 5.2, 6.1, 6.5, 7.4];
const y = [5.9, 5.4, 4.4, 4.6, 3.5, 3.7, 2.8, 2.8, 2.4, 1.5];
const wx = [1000, 1000, 500, 800, 200, 80, 60, 20, 1.8, 1];
const wy = [1, 1.8, 4, 8, 20, 20, 70, 70, 100, 500];

describe("Pearson's data with York's weights", () => {
	const fit = fitBothAxes(uncertain(x, wx), uncertain(y, wy), {}, stated);

	it('gives the line as published', () => {
		// Neri et al., J. Phys. E 22 (1989) 215: 5.47991022 and -0.480533407
		expect(fit.intercept.value).toBeCloseTo(5.47991022, 8);
		expect(fit.slope.value).toBeCloseTo(-0.480533407, 9);
		expect(fit.chiSquared).toBeCloseTo(11.8663532, 7);
		expect(fit.degreesOfFreedom).toBe(8);
	});

	it('gives the standard errors of York et al., Am. J. Phys. 72 (2004) 367, unscaled, at the adjusted points', () => {
		// recomputed to nine digits by the York 2004 iteration and by scipy.odr 1.10.1 (unscaled)
		expect(standardUncertainty(fit.intercept)).toBeCloseTo(0.294970735, 8);
		expect(standardUncertainty(fit.slope)).toBeCloseTo(0.057985009, 8);
		expect(covariance(fit.slope, fit.intercept)).toBeCloseTo(-0.0164725447, 9);
		expect(fit.covariance).toBeCloseTo(-0.0164725447, 9);
		expect(lineAt(fit)(0).standard).toBeCloseTo(0.29497074, 8);
		// not those at the observed points, 0.29193 and 0.057617 (Kalantar, Meas. Sci. Technol. 3 (1992) 1113)
		expect(standardUncertainty(fit.slope)).not.toBeCloseTo(0.057617, 4);
	});

	it('keeps the errors scaled by chi-squared beside them', () => {
		// scipy.odr 1.10.1 sd_beta
		expect(fit.scaled?.intercept).toBeCloseTo(0.35924657, 7);
		expect(fit.scaled?.slope).toBeCloseTo(0.07062028, 7);
		expect(fit.unscaled.slope).toBeCloseTo(standardUncertainty(fit.slope), 12);
		const relative = fitBothAxes(uncertain(x, wx), uncertain(y, wy), {}, { ...stated, policy: 'scatter' });
		expect(standardUncertainty(relative.slope)).toBeCloseTo(0.07062028, 7);
		expect(standardUncertainty(relative.intercept)).toBeCloseTo(0.35924657, 7);
		expect(combinedUncertainty(relative.slope).degreesOfFreedom).toBe(8);
	});

	it('gives the same line with the axes exchanged', () => {
		const turned = fitBothAxes(uncertain(y, wy), uncertain(x, wx), {}, stated);
		expect(1 / turned.slope.value).toBeCloseTo(fit.slope.value, 11);
		expect(-turned.intercept.value / turned.slope.value).toBeCloseTo(fit.intercept.value, 10);
		// u(1/b) = u(b)/b2
		expect(standardUncertainty(turned.slope) / turned.slope.value ** 2).toBeCloseTo(0.057985009, 8);
	});
});

describe('line with deviations in both axes', () => {
	it('is the weighted line where x is exact', () => {
		const exactX = x.map(plainNumber);
		const [york, line] = [
			fitBothAxes(exactX, uncertain(y, wy), {}, stated),
			fitLine(exactX, uncertain(y, wy), { ...stated, weights: 'stated' })
		];
		expect(york.slope.value).toBeCloseTo(line.slope.value, 12);
		expect(standardUncertainty(york.intercept)).toBeCloseTo(standardUncertainty(line.intercept), 12);
		expect(york.leverage.reduce((sum, each) => sum + each, 0)).toBeCloseTo(2, 10);
	});

	it('minimises the sum it is defined by, with correlation in each point', () => {
		const r = 0.6;
		const fit = fitBothAxes(uncertain(x, wx), uncertain(y, wy), { correlation: r }, stated);
		const merit = (a: number, b: number) =>
			x.reduce((sum, each, i) => {
				const [ux, uy] = [1 / Math.sqrt(wx[i] ?? NaN), 1 / Math.sqrt(wy[i] ?? NaN)];
				const q = uy * uy + b * b * ux * ux - 2 * b * r * ux * uy;
				return sum + ((y[i] ?? 0) - a - b * each) ** 2 / q;
			}, 0);
		const [a, b] = [fit.intercept.value, fit.slope.value];
		expect(merit(a, b)).toBeCloseTo(fit.chiSquared ?? NaN, 10);
		for (const [da, db] of [
			[1e-4, 0],
			[-1e-4, 0],
			[0, 1e-5],
			[0, -1e-5],
			[1e-4, -2e-5],
			[-1e-4, 2e-5]
		] as const) {
			// prettier-ignore
			expect(merit(a + da, b + db)).toBeGreaterThan(merit(a, b));
		}
	});

	it('takes a correlation from the sources that x and y of a point share', () => {
		const r = 0.6;
		const [sharedX, sharedY] = [uncertain(x, wx), uncertain(y, wy)].map((column) => column);
		const pairs = x.map((value, i) => {
			const [ux, uy] = [1 / Math.sqrt(wx[i] ?? NaN), 1 / Math.sqrt(wy[i] ?? NaN)];
			const [common, own] = [source(), source()];
			return {
				x: withDeviations(plainNumber(value), [[common, ux]]),
				y: withDeviations(plainNumber(y[i] ?? NaN), [[common, r * uy], [own, Math.sqrt(1 - r * r) * uy]]) // prettier-ignore
			};
		});
		const bySources = fitBothAxes(pairs.map((p) => p.x), pairs.map((p) => p.y), {}, stated); // prettier-ignore
		const byNumber = fitBothAxes(sharedX ?? [], sharedY ?? [], { correlation: r }, stated);
		expect(bySources.slope.value).toBeCloseTo(byNumber.slope.value, 12);
		expect(standardUncertainty(bySources.slope)).toBeCloseTo(standardUncertainty(byNumber.slope), 12);
		expect(standardUncertainty(bySources.intercept)).toBeCloseTo(standardUncertainty(byNumber.intercept), 12);
	});

	it('carries a shared deviation of any point as a fit of moved points would', () => {
		const h = 1e-5;
		for (const axis of ['x', 'y'] as const) {
			for (const i of [0, 4, 8]) {
				const probe = source('instrument');
				const marked = (axis === 'x' ? uncertain(x, wx) : uncertain(y, wy)).map((each, j) =>
					j === i ? withDeviations(each, [[probe, 1]]) : each
				);
				const fit =
					axis === 'x'
						? fitBothAxes(marked, uncertain(y, wy), {}, stated)
						: fitBothAxes(uncertain(x, wx), marked, {}, stated);
				const moved = (by: number) => {
					const shift = (values: readonly number[]) => values.map((each, j) => (j === i ? each + by : each));
					return axis === 'x'
						? fitBothAxes(uncertain(shift(x), wx), uncertain(y, wy), {}, stated)
						: fitBothAxes(uncertain(x, wx), uncertain(shift(y), wy), {}, stated);
				};
				const [above, below] = [moved(h), moved(-h)];
				for (const of of ['slope', 'intercept'] as const) {
					const numeric = (above[of].value - below[of].value) / (2 * h);
					expect(fit[of].parts.get(probe) ?? 0).toBeCloseTo(numeric, 8);
				}
			}
		}
	});

	it('refuses points that state nothing', () => {
		expect(() => fitBothAxes(x.map(plainNumber), y.map(plainNumber), {}, stated)).toThrow(
			/wants an uncertainty/
		);
	});
});
