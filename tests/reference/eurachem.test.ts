import { describe, expect, it } from 'vitest';
import {
	add,
	budget,
	combinedUncertainty,
	correlated,
	covarianceFrom,
	coverageFactor,
	divide,
	exp,
	ln,
	mean,
	multiply,
	parseUnit,
	plainNumber,
	power,
	squareRoot,
	standardUncertainty,
	subtract,
	toldIn,
	valueIn,
	withDeviations,
	type Quantity
} from '$lib/quantities';
import { input, rectangular, triangular, withComponents } from './uncertain-inputs';

/** Eurachem/CITAC Guide CG 4, Quantifying Uncertainty in Analytical Measurement, 3rd edition (2012), examples A1 to A3. */

const number = (value: number) => plainNumber(value);

function contributions(quantity: Quantity, scale: number): Record<string, number> {
	return Object.fromEntries(
		budget(quantity).map(({ component, contribution }) => [component.label, contribution * scale])
	);
}

describe('A1, cadmium calibration standard', () => {
	const purity = input(0.9999, rectangular(0.0001), { label: 'P' });
	const mass = input(100.28, 0.05, { unit: 'mg', label: 'm' });
	// flask, repeatability, temperature: 100 mL times 2.1e-4 /K times 4 K
	const volume = withComponents(100, [['flask', triangular(0.1)], ['repeatability', 0.02], ['temperature', rectangular(0.084)]], 'mL'); // prettier-ignore
	const result = toldIn(divide(multiply(mass, purity), volume), parseUnit('mg/L'));

	it('gives the published 1002.7 mg/L with its budget', () => {
		expect(valueIn(result)).toBeCloseTo(1002.7, 1);
		const u = standardUncertainty(result) / result.unit.factor;
		// unrounded 0.835199; the guide rounds u(V) to 0.07 and prints 0.9 (from memory)
		expect(u).toBeCloseTo(0.835199, 4);
		const parts = contributions(result, 1 / result.unit.factor);
		expect(parts.m).toBeCloseTo(0.49995, 5);
		expect(parts.flask).toBeCloseTo(0.40935, 4);
		expect(parts.temperature).toBeCloseTo(0.486284, 4);
		expect(parts.repeatability).toBeCloseTo(0.20054, 5);
		expect(parts.P).toBeCloseTo(0.0578967, 5);
	});

	it('gives the published 0.9 and expanded 1.8 as the guide rounds them', () => {
		const rounded = input(100, 0.07, { unit: 'mL' });
		const again = toldIn(divide(multiply(mass, purity), rounded), parseUnit('mg/L'));
		const u = (standardUncertainty(again) / again.unit.factor).toFixed(1);
		expect(u).toBe('0.9');
		expect(2 * Number(u)).toBe(1.8);
	});
});

/** C8H5O4K with the 1997 atomic weights and their limits, as the guide's table has them. */
function phthalate(): Quantity {
	const atom = (value: number, half: number) =>
		input(value, rectangular(half), { unit: 'g/mol', label: 'M' });
	const of = (count: number, weight: Quantity) => multiply(number(count), weight);
	return [
		of(8, atom(12.0107, 0.0008)),
		of(5, atom(1.00794, 0.00007)),
		of(4, atom(15.9994, 0.0003)),
		of(1, atom(39.0983, 0.0001))
	].reduce(add);
}

/** 60.5450 g less 60.1562 g, each weighing with its own linearity. */
function weighedPhthalate(): Quantity {
	const weighing = (value: number) => input(value, rectangular(0.00015), { unit: 'g', label: 'm' });
	return subtract(weighing(60.545), weighing(60.1562));
}

describe('A2, sodium hydroxide against phthalate', () => {
	const molarMass = phthalate();

	it('has the published molar mass', () => {
		expect(valueIn(toldIn(molarMass, parseUnit('g/mol')))).toBeCloseTo(204.2212, 4);
		expect(standardUncertainty(molarMass) / parseUnit('g/mol').factor).toBeCloseTo(0.0038, 4);
	});

	it('gives the published 0.10214 mol/L, u = 0.00010', () => {
		const purity = input(1, rectangular(0.0005), { label: 'P' });
		const volume = withComponents(
			18.64,
			[
				['burette', triangular(0.03)],
				['temperature', 0.006]
			],
			'mL'
		);
		const repeatability = input(1, 0.0005, { label: 'R' });
		const amount = divide(multiply(multiply(repeatability, weighedPhthalate()), purity), molarMass);
		const result = toldIn(divide(amount, volume), parseUnit('mol/L'));
		const molar = 1 / result.unit.factor;
		expect(valueIn(result)).toBeCloseTo(0.102136159706, 11);
		expect(valueIn(result)).toBeCloseTo(0.10214, 5);
		expect(standardUncertainty(result) * molar).toBeCloseTo(0.000100500722, 9);
		const parts = contributions(result, molar);
		expect(parts.R).toBeCloseTo(5.10681e-5, 10);
		expect(parts.P).toBeCloseTo(2.94842e-5, 9);
		// the two weighings are two lines here
		expect(Math.hypot(...budget(result).filter(({ component }) => component.label === 'm').map(({ contribution }) => contribution * molar))).toBeCloseTo(3.21735e-5, 10); // prettier-ignore
		expect(Math.hypot(parts.burette ?? NaN, parts.temperature ?? NaN)).toBeCloseTo(7.47292e-5, 9);
	});
});

describe('A3, hydrochloric acid against sodium hydroxide', () => {
	const expansion = (millilitres: number) => rectangular(millilitres * 2.1e-4 * 4);
	const volume = (value: number, tolerance: number, nominal: number, name: string) =>
		withComponents(value, [[name, triangular(tolerance)], [name, expansion(nominal)]], 'mL'); // prettier-ignore
	const purity = input(1, rectangular(0.0005), { label: 'P' });
	const molarMass = phthalate();

	function concentration(repeatability: number): Quantity {
		const first = volume(18.64, 0.03, 19, 'V_T1');
		const second = volume(14.89, 0.03, 15, 'V_T2');
		const acid = volume(15, 0.02, 15, 'V_HCl');
		const base = divide(multiply(weighedPhthalate(), purity), multiply(first, molarMass));
		const result = divide(multiply(base, second), acid);
		return toldIn(multiply(result, input(1, repeatability, { label: 'R' })), parseUnit('mol/L'));
	}

	it('gives the published 0.10139 mol/L, u = 0.00018', () => {
		const result = concentration(0.001);
		const molar = 1 / result.unit.factor;
		expect(valueIn(result)).toBeCloseTo(0.1013871612, 10);
		expect(standardUncertainty(result) * molar).toBeCloseTo(0.0001843, 7);
		const line = (label: string) =>
			Math.hypot(...budget(result).filter(({ component }) => component.label === label).map(({ contribution }) => contribution * molar)); // prettier-ignore
		expect(line('R')).toBeCloseTo(0.000101387, 9);
		expect(line('V_T2')).toBeCloseTo(9.69953e-5, 9);
		expect(line('V_T1')).toBeCloseTo(8.33653e-5, 9);
		expect(line('V_HCl')).toBeCloseTo(7.39151e-5, 9);
		expect(line('m')).toBeCloseTo(3.19376e-5, 10);
	});

	it('gives 0.00016 where the repeatability is that of three titrations', () => {
		const result = concentration(0.001 / Math.sqrt(3));
		expect(standardUncertainty(result) / result.unit.factor).toBeCloseTo(0.00016, 5);
	});
});

describe('other published examples', () => {
	it('NIST Technical Note 1900, E13: thermal expansion 1.7266e-5 /K, u = 1.76e-6', () => {
		const length = (value: number, u: number) => input(value, u, { unit: 'm', degreesOfFreedom: 3 });
		const [cold, warm] = [length(1.4999, 0.0001), length(1.5021, 0.0002)];
		const [t0, t1] = [input(288.15, 0.02, { unit: 'K', degreesOfFreedom: 3 }), input(373.1, 0.05, { unit: 'K', degreesOfFreedom: 3 })]; // prettier-ignore
		const alpha = divide(subtract(warm, cold), multiply(cold, subtract(t1, t0)));
		expect(alpha.value).toBeCloseTo(1.7266e-5, 9);
		expect(standardUncertainty(alpha)).toBeCloseTo(1.76e-6, 8);
	});

	it('NIST Uncertainty Machine manual, example 10: Stefan-Boltzmann constant, u = 2.05e-13', () => {
		const raise = (a: Quantity, n: number) => power(a, number(n));
		const h = input(6.62606957e-34, 2.9e-41);
		const gas = input(8.3144621, 7.5e-6);
		const rydberg = input(10973731.568539, 5.5e-5);
		const electron = input(0.00054857990946, 2.2e-13);
		const alpha = input(0.0072973525698, 2.4e-12);
		const below = multiply(
			multiply(raise(electron, 4), raise(alpha, 8)),
			number(15 * 1e-12 * 299792458 ** 6)
		);
		const above = multiply(
			multiply(h, multiply(raise(gas, 4), raise(rydberg, 4))),
			number(32 * Math.PI ** 5)
		);
		const sigma = divide(above, below);
		expect(sigma.value).toBeCloseTo(5.67037e-8, 13);
		expect(standardUncertainty(sigma)).toBeCloseTo(2.05e-13, 15);
	});

	it('JCGM GUM-5:2026, relative molecular mass of glucose: 180.1557, u = 0.0038', () => {
		const [h, c, o] = [input(1.00798, 8e-5), input(12.0106, 5.8e-4), input(15.9994, 2.1e-4)];
		const glucose = add(add(multiply(number(12), h), multiply(number(6), c)), multiply(number(6), o));
		expect(glucose.value).toBeCloseTo(180.1557, 3);
		expect(standardUncertainty(glucose)).toBeCloseTo(0.0038, 4);
	});

	it('JCGM GUM-5:2026, decay correction: 10.81, u = 0.054', () => {
		const [activity, halfLife] = [input(11.45, 0.05), input(32.9, 1.4)];
		const decayed = multiply(activity, exp(divide(multiply(number(-2.73), ln(number(2))), halfLife)));
		expect(decayed.value).toBeCloseTo(10.81, 2);
		expect(standardUncertainty(decayed)).toBeCloseTo(0.054, 3);
	});

	it('JCGM GUM-5:2026, pH between two standards: 7.0002, u = 0.0041', () => {
		const [ex, e1, e2] = [input(-1.875, 0.025), input(6.15, 0.0289), input(-26.35, 0.0289)];
		const [p1, p2] = [input(6.864, 0.0051), input(7.4157, 0.0051)];
		const pH = add(p1, divide(multiply(subtract(ex, e1), subtract(p2, p1)), subtract(e2, e1)));
		expect(pH.value).toBeCloseTo(7.0002, 4);
		expect(standardUncertainty(pH)).toBeCloseTo(0.0041, 4);
	});

	it('JCGM GUM-5:2026, resistance thermometer with correlated constants: 20.0232, u = 0.0045', () => {
		const component = { id: 'c', label: 'c', scope: 'instrument', degreesOfFreedom: Infinity } as const;
		const [r0 = number(NaN), a = number(NaN), b = number(NaN)] = correlated(
			[number(99.9961), number(0.0039096), number(-6e-7)],
			covarianceFrom(
				[0.0005, 2.7e-6, 1.1e-7],
				[[1, -0.155, 0.092], [-0.155, 1, -0.959], [0.092, -0.959, 1]] // prettier-ignore
			),
			component
		);
		const ratio = divide(multiply(input(1.0780057, 5e-6), input(99.99947, 1e-4)), r0);
		// the root of b t^2 + a t + 1 - ratio
		const root = squareRoot(
			subtract(multiply(a, a), multiply(multiply(number(4), b), subtract(number(1), ratio)))
		);
		const t = divide(subtract(root, a), multiply(number(2), b));
		expect(t.value).toBeCloseTo(20.0232, 3);
		expect(standardUncertainty(t)).toBeCloseTo(0.0045, 4);
	});

	it('JCGM GUM-5:2026, breaking force of six specimens: 10005.7, u = 9.9 kN', () => {
		const readings = [10006, 10007, 10005, 10008, 10003, 10005].map(number);
		const deviations = [6.8, 8.2, 8.7, 10.2].map((half, i) => {
			const label = `calibration ${i}`;
			const source = {
				component: { id: label, label, scope: 'instrument', degreesOfFreedom: Infinity }
			} as const;
			return [source, rectangular(half)] as const;
		});
		const scatter = { component: { id: 's', label: 's', scope: 'run', degreesOfFreedom: 5 } } as const;
		const force = withDeviations(mean(readings), [...deviations, [scatter, 0.7]]);
		expect(force.value).toBeCloseTo(10005.7, 1);
		const { standard, degreesOfFreedom } = combinedUncertainty(force);
		expect(standard).toBeCloseTo(9.9, 1);
		expect(coverageFactor(0.95, degreesOfFreedom) * standard).toBeCloseTo(19.4, 1);
	});
});
