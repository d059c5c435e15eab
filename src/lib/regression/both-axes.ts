import {
	addPart,
	divideUnits,
	intervalUnit,
	type Component,
	type Quantity,
	type Source
} from '$lib/quantities';
import { compensatedSum } from '$lib/statistics';
import type { LineFit } from './line';
import { leastSquares, noSpread } from './line-sums';
import type { FitOptions } from './fit-types';
import { square } from './fit-curve';
import { FitProblem, outOfRange, requirePoints } from './problems';
import { bothAxesDerivatives, readingSpreads, type Spread, type YorkLine } from './york';

export interface BothAxesFit extends LineFit {
	/** where each point was most likely without its deviations, SI */
	readonly adjusted: readonly { x: number; y: number }[];
	/**
	 * standard uncertainties of York (2004) from the stated ones alone, and the same times the root of chi-squared over
	 * its degrees of freedom: to be shown side by side where chi-squared is large; null when nothing is left to tell it
	 */
	readonly unscaled: { readonly slope: number; readonly intercept: number };
	readonly scaled: { readonly slope: number; readonly intercept: number } | null;
	readonly iterations: number;
}

const mostIterations = 500;

/**
 * Straight line where both axes have reading-scope uncertainty, which may be correlated in a point (York et al., Am. J.
 * Phys. 72 (2004) 367). Standard errors are evaluated at the adjusted points. Policy 'stated' tells them unscaled;
 * 'scatter' takes the stated ones as relative and scales them by the residual scatter with n - 2 degrees of freedom.
 * `correlation`, one number or one a point, is used where x and y of a point share no source that tells it.
 * @throws FitProblem
 */
export function fitBothAxes(
	x: readonly Quantity[],
	y: readonly Quantity[],
	{ correlation }: { correlation?: number | readonly number[] },
	options: Omit<FitOptions, 'weights'>
): BothAxesFit {
	requirePoints(x.length, 2, options.policy);
	const [xs, ys] = [x.map(({ value }) => value), y.map(({ value }) => value)];
	if (xs.every((value) => value === xs[0])) throw noSpread('free');
	const spreads = readingSpreads(x, y, correlation);
	const line = solve(xs, ys, spreads);
	const { slope, centreX, centreY, w, deviationX, xx, total } = line;
	const degreesOfFreedom = xs.length - 2;
	const residuals = xs.map((each, i) => (ys[i] ?? 0) - centreY - slope * (each - centreX));
	const chiSquared = compensatedSum(residuals.map((r, i) => (w[i] ?? 0) * r * r));
	const deviation = degreesOfFreedom > 0 ? Math.sqrt(chiSquared / degreesOfFreedom) : null;

	const slopeParts = new Map<Source, number>();
	const centreParts = new Map<Source, number>();
	const exact = bothAxesDerivatives(line, xs, residuals, spreads);
	const carry = (source: Source, part: number, towards: { slope: number; height: number }) => {
		addPart(slopeParts, source, towards.slope * part);
		addPart(centreParts, source, towards.height * part);
	};
	xs.forEach((_, i) => {
		// at the adjusted points the readings' own parts add up to the standard errors of York (2004)
		const own = { slope: ((w[i] ?? 0) * (deviationX[i] ?? 0)) / xx, height: (w[i] ?? 0) / total };
		const ownX = { slope: -slope * own.slope, height: -slope * own.height };
		const { byX, byY } = exact(i);
		for (const [axis, towards, shared] of [
			[y[i], own, byY],
			[x[i], ownX, byX]
		] as const) {
			// prettier-ignore
			for (const [source, part] of axis?.parts ?? []) {
				if (source.component.scope !== 'reading') carry(source, part, shared);
				else if (options.policy === 'stated' && correlation === undefined) carry(source, part, towards);
			}
		}
	});
	const standard = { slope: 1 / Math.sqrt(xx), height: 1 / Math.sqrt(total) };
	const scale = options.policy === 'scatter' ? deviation : correlation === undefined ? null : 1;
	if (scale !== null && scale > 0) {
		const component: Component =
			options.policy === 'scatter'
				? { id: `${options.id}:scatter`, label: options.scatterLabel, scope: 'run', degreesOfFreedom }
				: {
						id: `${options.id}:stated`,
						label: options.scatterLabel,
						scope: 'run',
						degreesOfFreedom: Infinity
					};
		addPart(centreParts, { component }, scale * standard.height);
		addPart(slopeParts, { component }, scale * standard.slope);
	}
	const unscaled = {
		slope: standard.slope,
		intercept: Math.sqrt(1 / total + (centreX * centreX) / xx)
	};
	return {
		id: options.id,
		points: xs.length,
		degreesOfFreedom,
		policy: options.policy,
		...told(x, y, line, slopeParts, centreParts),
		centreX,
		spreadX: xx,
		residuals,
		leverage: w.map((each, i) => each * (1 / total + square(deviationX[i] ?? 0) / xx)),
		covariance: (-centreX / xx) * (options.policy === 'scatter' ? square(deviation ?? 0) : 1),
		residualStandardDeviation: deviation,
		chiSquared,
		adjusted: deviationX.map((d) => ({ x: centreX + d, y: centreY + slope * d })),
		unscaled,
		scaled: deviation === null ? null : { slope: unscaled.slope * deviation, intercept: unscaled.intercept * deviation }, // prettier-ignore
		iterations: line.iterations
	};
}

function solve(xs: readonly number[], ys: readonly number[], spreads: readonly Spread[]): YorkLine {
	let slope = leastSquares(xs, ys, xs.map(() => 1), 'free').slope; // prettier-ignore
	let change = Infinity;
	for (let iterations = 1; iterations <= mostIterations; iterations += 1) {
		const b = slope;
		const w = spreads.map(({ xx, yy, xy }) => 1 / (yy + b * b * xx - 2 * b * xy));
		const total = compensatedSum(w);
		const meanOf = (values: readonly number[]) =>
			compensatedSum(values.map((value, i) => (w[i] ?? 0) * value)) / total;
		const [meanX, meanY] = [meanOf(xs), meanOf(ys)];
		const beta = xs.map((each, i) => {
			const { xx = 0, yy = 0, xy = 0 } = spreads[i] ?? {};
			const [u, v] = [each - meanX, (ys[i] ?? 0) - meanY];
			return (w[i] ?? 0) * (u * yy + b * v * xx - (b * u + v) * xy);
		});
		const weigh = (values: readonly number[], mean: number) =>
			compensatedSum(beta.map((each, i) => (w[i] ?? 0) * each * ((values[i] ?? 0) - mean)));
		slope = weigh(ys, meanY) / weigh(xs, meanX);
		if (!Number.isFinite(slope) || !w.every((each) => each > 0)) throw outOfRange();
		const now = Math.abs(slope - b);
		if (now <= 1e-15 * Math.abs(slope) || (now <= 1e-11 * Math.abs(slope) && now >= change)) {
			const shift = meanOf(beta);
			const deviationX = beta.map((each) => each - shift);
			return {
				slope,
				centreX: meanX + shift,
				centreY: meanY + slope * shift,
				w,
				total,
				deviationX,
				xx: compensatedSum(deviationX.map((d, i) => (w[i] ?? 0) * d * d)),
				iterations
			};
		}
		change = now;
	}
	throw new FitProblem(
		'no-convergence',
		'The points do not settle on one line. Look at their stated uncertainties.'
	);
}

function told(
	x: readonly Quantity[],
	y: readonly Quantity[],
	{ slope, centreX, centreY }: YorkLine,
	slopeParts: Map<Source, number>,
	centreParts: Map<Source, number>
): Pick<LineFit, 'slope' | 'centre' | 'intercept'> {
	const [firstX, firstY] = [x[0], y[0]];
	if (!firstX || !firstY) throw new FitProblem('too-few-points', 'No points yet.');
	const unit = divideUnits(firstY.unit, firstX.unit);
	const height = { dimension: firstY.dimension, unit: intervalUnit(firstY.unit), point: false };
	const interceptParts = new Map(centreParts);
	for (const [source, part] of slopeParts) addPart(interceptParts, source, -centreX * part);
	return {
		slope: { value: slope, dimension: unit.dimension, unit, point: false, parts: slopeParts },
		centre: { ...height, value: centreY, parts: centreParts },
		intercept: { ...height, value: centreY - slope * centreX, parts: interceptParts }
	};
}
