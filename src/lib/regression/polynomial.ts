import { divideUnits, intervalUnit, type Quantity, type Unit } from '$lib/quantities';
import { WideSum, wide, type Wide } from './double-double';
import { powerOfTwoAbove } from './least-squares';
import { solveWeighted, unitOf } from './linear';
import type { FitOptions, InputSlope, ModelFit } from './fit-types';
import { modelFit } from './model-fit';
import { FitProblem, requirePoints } from './problems';

/**
 * y = b0 + b1 x + ... + bm x^m by least squares over quantities, `degree` m. Solved in Chebyshev polynomials of the
 * centred x, in which the terms hardly resemble one another, and told in powers of x by exact conversion: the tenth
 * degree over x from -9 to -3 keeps its digits. `at` takes x alone.
 * @throws FitProblem
 */
export function fitPolynomial(
	x: readonly Quantity[],
	y: readonly Quantity[],
	degree: number,
	options: FitOptions
): ModelFit {
	const count = degree + 1;
	requirePoints(y.length, count, options.policy);
	const different = new Set(x.map(({ value }) => value)).size;
	if (different < count) {
		throw new FitProblem(
			'no-spread',
			different === 1
				? 'All points have the same x, so there is no curve through them. Vary it.'
				: `Only ${different} different values of x: a curve of degree ${degree} wants ${count} at least.`
		);
	}
	const scale = scaleOf(x.map(({ value }) => value));
	const columns = basisColumns(x, count, scale);
	const exact = x.every(({ parts }) => parts.size === 0);
	const inputsFor = (inner: readonly number[], i: number): InputSlope[] => {
		const input = x[i];
		if (exact || !input || input.parts.size === 0) return [];
		const { gradient } = basisAt(input.value, count, scale);
		return [{ input, slope: dot(inner, gradient), gradient }];
	};
	const { solution, weights } = solveWeighted(columns, y, options, inputsFor);
	const inner = Array.from(solution.parameters.high);
	const powers = powersOfBasis(count, scale);
	const values = combine(powers, solution.parameters);
	const units = unitsOf(unitOf(x), unitOf(y), count);
	return modelFit(
		{
			y,
			parameters: units.map((unit, j) => ({
				value: values[j] ?? 0,
				dimension: unit.dimension,
				unit,
				point: false
			})),
			weights,
			fitted: y.map(({ value }, i) => value - (solution.residuals[i] ?? 0)),
			residuals: solution.residuals,
			scatter: solution.scatter,
			inner: solution.spread,
			spread: values.map((_, power) =>
				inner.map((__, k) =>
					powers.reduce((sum, row, j) => sum + (row.high[power] ?? 0) * (solution.spread[j]?.[k] ?? 0), 0)
				)
			),
			directions: solution.directions,
			inputs: (i) => inputsFor(inner, i),
			evaluate: ([at = NaN]) => {
				const { values: gradient } = basisAt(at, count, scale);
				return { value: dot(inner, gradient), gradient };
			},
			iterations: 1
		},
		options
	);
}

interface Scale {
	centre: number;
	/** a power of two, so that dividing by it is exact */
	half: number;
}

function scaleOf(x: readonly number[]): Scale {
	const low = Math.min(...x);
	const high = Math.max(...x);
	return { centre: low + (high - low) / 2, half: powerOfTwoAbove((high - low) / 2) };
}

/** Chebyshev polynomials of t = (x - centre) / half at each point, by their recurrence in doubled precision. */
function basisColumns(x: readonly Quantity[], count: number, { centre, half }: Scale): Wide[] {
	const columns = Array.from({ length: count }, () => wide(x.length));
	const sum = new WideSum();
	x.forEach(({ value }, i) => {
		sum.set(value).add(-centre);
		const [high, low] = [sum.high / half, sum.low / half];
		columns.forEach((column, j) => {
			const [last, previous] = [columns[j - 1], columns[j - 2]];
			if (!last) sum.set(1);
			else if (!previous) sum.set(high, low);
			else {
				sum.set(-(previous.high[i] ?? 0), -(previous.low[i] ?? 0));
				sum.addProduct(2 * high, 2 * low, last.high[i] ?? 0, last.low[i] ?? 0);
			}
			sum.into(column, i);
		});
	});
	return columns;
}

/** The same at one x in plain doubles, with the derivatives towards x. */
function basisAt(x: number, count: number, { centre, half }: Scale) {
	const t = (x - centre) / half;
	const values: number[] = [];
	const gradient: number[] = [];
	for (let j = 0; j < count; j += 1) {
		const [last = 0, previous = 0] = [values[j - 1], values[j - 2]];
		const [slope = 0, slopeBefore = 0] = [gradient[j - 1], gradient[j - 2]];
		values.push(j === 0 ? 1 : j === 1 ? t : 2 * t * last - previous);
		gradient.push(j === 0 ? 0 : j === 1 ? 1 / half : 2 * (last / half + t * slope) - slopeBefore);
	}
	return { values, gradient };
}

/** Row j: the j-th Chebyshev polynomial of t as powers of x, in doubled precision. */
function powersOfBasis(count: number, { centre, half }: Scale): Wide[] {
	const rows = Array.from({ length: count }, () => wide(count));
	const sum = new WideSum();
	rows.forEach((row, j) => {
		const [last, previous] = [rows[j - 1], rows[j - 2]];
		const factor = j === 1 ? 1 : 2;
		for (let power = 0; power <= j; power += 1) {
			if (!last) sum.set(1);
			else {
				// factor * (x - centre) / half * last - previous
				sum.set(-(previous?.high[power] ?? 0), -(previous?.low[power] ?? 0));
				sum.addProduct(factor / half, 0, last.high[power - 1] ?? 0, last.low[power - 1] ?? 0);
				sum.addProduct((-factor * centre) / half, 0, last.high[power] ?? 0, last.low[power] ?? 0);
			}
			sum.into(row, power);
		}
	});
	return rows;
}

function combine(powers: readonly Wide[], inner: Wide): number[] {
	return powers.map((_, power) => {
		const sum = new WideSum();
		powers.forEach((row, j) =>
			sum.addProduct(row.high[power] ?? 0, row.low[power] ?? 0, inner.high[j] ?? 0, inner.low[j] ?? 0)
		);
		return sum.high;
	});
}

function unitsOf(x: Unit, y: Unit, count: number): Unit[] {
	const units = [intervalUnit(y)];
	while (units.length < count) units.push(divideUnits(units[units.length - 1] ?? y, x));
	return units;
}

function dot(a: readonly number[], b: readonly number[]): number {
	return a.reduce((sum, each, i) => sum + each * (b[i] ?? 0), 0);
}
