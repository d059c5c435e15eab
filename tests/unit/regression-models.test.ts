import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	combinedUncertainty,
	covariance,
	parseUnit,
	exactly,
	plainNumber,
	standardUncertainty,
	unitText,
	withDeviations,
	type Quantity,
	type Scope,
	type Source
} from '$lib/quantities';
import {
	dual,
	fitLine,
	fitLinear,
	fitNonlinear,
	fitPolynomial,
	FitProblem,
	inverseOnCurve,
	inversePrediction,
	lineAt,
	type Dual,
	type FitOptions,
	type Model,
	type ModelFit
} from '$lib/regression';

const { add, multiply, negate, exp, constant } = dual;
const options: FitOptions = { id: 'fit', scatterLabel: 'Scatter', policy: 'scatter', weights: 'equal' };
const stated: FitOptions = { ...options, policy: 'stated', weights: 'stated' };
const source = (scope: Scope): Source => ({
	component: { id: scope, label: scope, scope, degreesOfFreedom: Infinity }
});
const exact = (values: readonly number[]) => values.map(plainNumber);
const noisy = (values: readonly number[], u: number): Quantity[] =>
	values.map((value) => withDeviations(plainNumber(value), [[source('reading'), u]]));
const ones = (list: readonly unknown[]) => list.map(() => plainNumber(1));
const nothing = constant(NaN);

const xs = [0, 1, 2, 3, 4, 5, 6, 7];
const ys = [10.1, 7.4, 5.8, 4.5, 3.9, 3.2, 2.9, 2.7];
/** a + b exp(-k x) */
const relaxation: Model = ([a = nothing, b = nothing, k = nothing], [x = nothing]) =>
	add(a, multiply(b, exp(negate(multiply(k, x)))));
const straight: Model = ([a = nothing, b = nothing], [x = nothing]) => add(a, multiply(b, x));
const guess = exact([2, 8, 0.5]);

/** Derivative of every parameter towards a shift of one input or y, by fitting moved points. */
function byMoving(fitMoved: (by: number) => ModelFit, h = 1e-5): number[] {
	const [above, below] = [fitMoved(h), fitMoved(-h)];
	return above.parameters.map(({ value }, j) => (value - (below.parameters[j]?.value ?? NaN)) / (2 * h));
}

function shift(values: readonly number[], i: number, by: number): number[] {
	return values.map((value, j) => (j === i ? value + by : value));
}

function marked(values: readonly number[], i: number, probe: Source): Quantity[] {
	return values.map((value, j) =>
		j === i ? withDeviations(plainNumber(value), [[probe, 1]]) : plainNumber(value)
	);
}

const fits: Record<string, (x: Quantity[], y: Quantity[], o?: FitOptions) => ModelFit> = {
	'general linear': (x, y, o = options) => fitLinear([ones(x), x], y, o),
	cubic: (x, y, o = options) => fitPolynomial(x, y, 3, o),
	nonlinear: (x, y, o = options) => fitNonlinear(relaxation, [x], y, guess, o)
};

describe.each(Object.entries(fits))('%s fit', (name, fit) => {
	it('has the derivatives of every parameter towards every reading of both axes', () => {
		for (const i of [0, 3, 7]) {
			for (const axis of ['x', 'y'] as const) {
				const probe = source('instrument');
				const told = axis === 'x' ? fit(marked(xs, i, probe), exact(ys)) : fit(exact(xs), marked(ys, i, probe)); // prettier-ignore
				const numeric = byMoving((by) =>
					axis === 'x' ? fit(exact(shift(xs, i, by)), exact(ys)) : fit(exact(xs), exact(shift(ys, i, by)))
				);
				told.parameters.forEach(({ parts }, j) => {
					expect(parts.get(probe) ?? 0, `${axis}${i}, parameter ${j}`).toBeCloseTo(numeric[j] ?? NaN, 6);
				});
			}
		}
	});

	it('tells its covariance by the scatter, one variance estimate, and its leverage', () => {
		const told = fit(exact(xs), exact(ys));
		const s2 = told.residuals.reduce((sum, r) => sum + r * r, 0) / told.degreesOfFreedom;
		expect(told.residualStandardDeviation).toBeCloseTo(Math.sqrt(s2), 12);
		expect(told.degreesOfFreedom).toBe(xs.length - told.parameters.length);
		told.parameters.forEach((a, j) => {
			expect(combinedUncertainty(a).degreesOfFreedom).toBeCloseTo(told.degreesOfFreedom, 9);
			told.parameters.forEach((b, k) => {
				expect(told.covariance[j]?.[k]).toBeCloseTo(covariance(a, b), 12);
			});
		});
		expect(told.leverage.reduce((sum, h) => sum + h, 0)).toBeCloseTo(told.parameters.length, 10);
		told.fitted.forEach((value, i) => {
			expect(value + (told.residuals[i] ?? NaN)).toBeCloseTo(ys[i] ?? NaN, 12);
			const input = name === 'general linear' ? [1, xs[i] ?? NaN] : [xs[i] ?? NaN];
			const band = told.at(input);
			expect(band.value).toBeCloseTo(value, 10);
			// at a point of its own the band is s times the root of the leverage
			expect(band.standard).toBeCloseTo(Math.sqrt(s2 * (told.leverage[i] ?? NaN)), 10);
			expect(told.nextReading(input).standard).toBeCloseTo(Math.sqrt(s2 * (1 + (told.leverage[i] ?? NaN))), 10); // prettier-ignore
		});
	});

	it('replaces reading-scope parts by the scatter and keeps what is shared', () => {
		const offset = source('instrument');
		const bare = fit(exact(xs), exact(ys));
		const mixed = fit(exact(xs), noisy(ys, 0.3).map((each) => withDeviations(each, [[offset, 0.2]]))); // prettier-ignore
		// a shared offset of y moves the constant term alone
		mixed.parameters.forEach((parameter, j) => {
			expect(parameter.parts.get(offset) ?? 0).toBeCloseTo(j === 0 ? 0.2 : 0, 9);
			const own = standardUncertainty(bare.parameters[j] ?? plainNumber(NaN));
			expect(standardUncertainty(parameter)).toBeCloseTo(Math.sqrt(own ** 2 + (j === 0 ? 0.04 : 0)), 9);
			expect(mixed.covariance[j]?.[j]).toBeCloseTo(own ** 2, 10);
		});
		const at = mixed.at(name === 'general linear' ? [1, 2] : [2]);
		const without = bare.at(name === 'general linear' ? [1, 2] : [2]);
		expect(at.standard).toBeCloseTo(Math.sqrt(without.standard ** 2 + 0.04), 10);
	});

	it('tells chi-squared and the stated covariance under policy stated', () => {
		const told = fit(exact(xs), noisy(ys, 0.1), stated);
		const bare = fit(exact(xs), exact(ys));
		const s = bare.residualStandardDeviation ?? NaN;
		told.parameters.forEach((parameter, j) => {
			expect(parameter.value).toBeCloseTo(bare.parameters[j]?.value ?? NaN, 9);
			const own = standardUncertainty(bare.parameters[j] ?? plainNumber(NaN));
			// equal weights: the stated 0.1 in the place of the scatter
			expect(standardUncertainty(parameter)).toBeCloseTo((own / s) * 0.1, 9);
		});
		expect(told.chiSquared).toBeCloseTo((s * s * told.degreesOfFreedom) / 0.01, 8);
		expect(combinedUncertainty(told.parameters[0] ?? plainNumber(0)).degreesOfFreedom).toBe(Infinity);
	});

	it('does not depend on the order of the points', () => {
		const back = fit(exact([...xs].reverse()), exact([...ys].reverse()));
		fit(exact(xs), exact(ys)).parameters.forEach((parameter, j) => {
			const other = back.parameters[j] ?? plainNumber(NaN);
			expect(other.value).toBeCloseTo(parameter.value, 10);
			expect(standardUncertainty(other)).toBeCloseTo(standardUncertainty(parameter), 10);
		});
	});

	it('says that points are missing', () => {
		expect(() => fit([], [])).toThrow('No points yet.');
		expect(() => fit(exact([1]), exact([1]))).toThrow(FitProblem);
		const few = xs.slice(0, name === 'general linear' ? 2 : name === 'cubic' ? 4 : 3);
		expect(() => fit(exact(few), exact(few))).toThrow(/leave no scatter/);
	});
});

describe('models that are lines', () => {
	const x = noisy([1, 2, 3, 4, 5, 6], 0.02);
	const y = noisy([2.1, 3.9, 6.2, 7.8, 10.1, 11.9], 0.1);

	it.each([options, stated])('agree with the straight line, policy $policy', (o) => {
		const line = fitLine(x, y, o);
		const same = {
			linear: fitLinear([ones(x), x], y, o),
			polynomial: fitPolynomial(x, y, 1, o),
			nonlinear: fitNonlinear(straight, [x], y, exact([1, 1]), o)
		};
		for (const fit of Object.values(same)) {
			const [a = plainNumber(NaN), b = plainNumber(NaN)] = fit.parameters;
			expect(a.value).toBeCloseTo(line.intercept.value, 10);
			expect(b.value).toBeCloseTo(line.slope.value, 10);
			expect(standardUncertainty(a)).toBeCloseTo(standardUncertainty(line.intercept), 9);
			expect(standardUncertainty(b)).toBeCloseTo(standardUncertainty(line.slope), 9);
			expect(covariance(a, b)).toBeCloseTo(covariance(line.intercept, line.slope), 9);
			expect(fit.covariance[0]?.[1]).toBeCloseTo(line.covariance, 9);
			expect(fit.chiSquared ?? NaN).toBeCloseTo(line.chiSquared ?? NaN, 8);
			fit.leverage.forEach((h, i) => expect(h).toBeCloseTo(line.leverage[i] ?? NaN, 9));
			expect(fit.at(fit === same.linear ? [1, 9] : [9]).standard).toBeCloseTo(lineAt(line)(9).standard, 9);
		}
	});

	it('pass through the origin', () => {
		const line = fitLine(x, y, { ...options, through: 'origin' });
		const same = fitLinear([x], y, options);
		expect(line.slope.value).toBeCloseTo(same.parameters[0]?.value ?? NaN, 12);
		expect(standardUncertainty(line.slope)).toBeCloseTo(standardUncertainty(same.parameters[0] ?? plainNumber(NaN)), 12); // prettier-ignore
		expect(line.intercept.value).toBe(0);
		expect(standardUncertainty(line.intercept)).toBe(0);
		expect(line.degreesOfFreedom).toBe(5);
		expect(lineAt(line)(0).standard).toBe(0);
		expect(() => fitLine(exact([0, 0]), exact([1, 2]), { ...options, through: 'origin' })).toThrow(/x = 0/);
	});
});

describe('reading x off a curve', () => {
	const unit = parseUnit('1');

	it('agrees with the straight line', () => {
		const y = withDeviations(plainNumber(5), [[source('reading'), 0.3]]);
		const line = fitLine(exact(xs), exact(ys), options);
		for (const fit of [
			fitPolynomial(exact(xs), exact(ys), 1, options),
			fitNonlinear(straight, [exact(xs)], exact(ys), exact([1, 1]), options)
		]) {
			// prettier-ignore
			const [there, known] = [inverseOnCurve(fit, y, { from: 0, to: 9, unit }), inversePrediction(line, y)];
			expect(there.value).toBeCloseTo(known.value, 9);
			expect(standardUncertainty(there)).toBeCloseTo(standardUncertainty(known), 8);
		}
	});

	it('follows a bent one, with the uncertainty of its band over its slope', () => {
		const fit = fitNonlinear(relaxation, [exact(xs)], exact(ys), guess, options);
		const x = inverseOnCurve(fit, plainNumber(5), { from: 0, to: 7, unit });
		const band = fit.at([x.value]);
		expect(band.value).toBeCloseTo(5, 10);
		expect(standardUncertainty(fit.quantityAt([x.value]))).toBeCloseTo(band.standard, 12);
		const slope = (fit.at([x.value + 1e-5]).value - fit.at([x.value - 1e-5]).value) / 2e-5;
		expect(standardUncertainty(x)).toBeCloseTo(band.standard / Math.abs(slope), 8);
		expect(() => inverseOnCurve(fit, plainNumber(50), { from: 0, to: 7, unit })).toThrow(FitProblem);
	});
});

describe('units of parameters', () => {
	it('follow from those of y and the terms, or from the starting values', () => {
		const t = [0, 60, 120, 180, 240].map((value) => exactly(value, parseUnit('s')));
		const v = [0, 1.1, 2.3, 3.2, 4.4].map((value) => exactly(value, parseUnit('V')));
		const units = fitPolynomial(t, v, 2, options).parameters.map(({ unit }) => unitText(unit));
		expect(units).toEqual(['V', 'V/s', 'V/s^2']);
		const rate = fitNonlinear(straight, [t], v, [exactly(0, parseUnit('V')), exactly(1, parseUnit('V/s'))], options); // prettier-ignore
		expect(rate.parameters.map(({ unit }) => unitText(unit))).toEqual(['V', 'V/s']);
	});
});

describe('fits that cannot be', () => {
	it('say that terms depend on one another', () => {
		const x = exact(xs);
		const twice = exact(xs.map((value) => 2 * value));
		const attempt = () => fitLinear([ones(x), x, twice], exact(ys), options);
		expect(attempt).toThrow(expect.objectContaining({ code: 'singular' }) as Error);
		expect(attempt).toThrow(/one can make up for another/);
		const product: Model = ([a = nothing, b = nothing], [t = nothing]) => multiply(multiply(a, b), t);
		const ridge = () => fitNonlinear(product, [x], exact(ys), exact([1, 1]), options);
		expect(ridge).toThrow(expect.objectContaining({ code: 'singular' }) as Error);
	});

	it('say that x does not vary enough', () => {
		const attempt = () => fitPolynomial(exact([1, 1, 2, 2, 2]), exact([1, 2, 3, 4, 5]), 2, options);
		expect(attempt).toThrow('Only 2 different values of x: a curve of degree 2 wants 3 at least.');
	});

	it('say that a model has no value at the start, or no minimum', () => {
		const logarithm: Model = ([a = nothing], [t = nothing]) => dual.ln(multiply(a, t));
		const start = () => fitNonlinear(logarithm, [exact(xs)], exact(ys), exact([-1]), options);
		expect(start).toThrow(expect.objectContaining({ code: 'not-finite' }) as Error);
		// falls for ever towards infinite a
		const asymptote: Model = ([a = nothing], [t = nothing]) =>
			add(dual.divide(constant(1), a), multiply(constant(0), t));
		const falling = () => fitNonlinear(asymptote, [exact(xs)], exact(xs.map(() => 0)), exact([1]), options);
		expect(falling).toThrow(FitProblem);
	});

	it('end in bounded steps with numbers or a FitProblem, whatever the points', () => {
		const number = fc.double({ noNaN: true, noDefaultInfinity: true });
		fc.assert(
			fc.property(fc.array(fc.tuple(number, number), { maxLength: 7 }), (points) => {
				const [x, y] = [exact(points.map(([each]) => each)), exact(points.map(([, each]) => each))];
				for (const fit of Object.values(fits)) {
					try {
						for (const { value } of fit(x, y).parameters) expect(Number.isFinite(value)).toBe(true);
					} catch (cause) {
						if (!(cause instanceof FitProblem)) throw cause;
					}
				}
			}),
			{ seed: 310, numRuns: 200 }
		);
	}, 60_000);
});

describe('dual numbers', () => {
	const functions: Record<string, [(a: Dual) => Dual, (x: number) => number]> = {
		exp: [dual.exp, Math.exp],
		ln: [dual.ln, Math.log],
		log10: [dual.log10, Math.log10],
		sqrt: [dual.sqrt, Math.sqrt],
		abs: [dual.abs, Math.abs],
		sin: [dual.sin, Math.sin],
		cos: [dual.cos, Math.cos],
		tan: [dual.tan, Math.tan],
		asin: [dual.asin, Math.asin],
		acos: [dual.acos, Math.acos],
		atan: [dual.atan, Math.atan],
		'power of 2.5': [(a) => dual.power(a, constant(2.5)), (x) => x ** 2.5],
		'2.5 to the power': [(a) => dual.power(constant(2.5), a), (x) => 2.5 ** x],
		'power of itself': [(a) => dual.power(a, a), (x) => x ** x],
		inverse: [(a) => dual.divide(constant(1), a), (x) => 1 / x],
		'less its square': [(a) => dual.subtract(a, multiply(a, a)), (x) => x - x * x]
	};

	it.each(Object.entries(functions))('%s has value and derivative', (_, [ofDual, ofNumber]) => {
		for (const x of [0.1, 0.35, 0.6, 0.85]) {
			const { value, gradient } = ofDual(dual.variable(x, 1, 2));
			const h = 1e-6;
			expect(value).toBeCloseTo(ofNumber(x), 13);
			expect(gradient[0]).toBeCloseTo(0, 15);
			// the difference's own rounding grows with the slope
			const slope = gradient[1] ?? NaN;
			const numeric = (ofNumber(x + h) - ofNumber(x - h)) / (2 * h);
			expect((numeric - slope) / Math.max(1, Math.abs(slope))).toBeCloseTo(0, 8);
			expect(ofDual(constant(x)).gradient).toEqual([]);
		}
	});

	it('combines any number of variables', () => {
		for (const count of [1, 2, 3, 4, 7]) {
			const variables = Array.from({ length: count }, (_, i) => dual.variable(i + 2, i, count));
			const product = variables.reduce(multiply);
			product.gradient.forEach((each, i) => expect(each).toBeCloseTo(product.value / (i + 2), 10));
			expect(product.gradient).toHaveLength(count);
		}
	});
});
