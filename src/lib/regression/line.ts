import {
	addPart,
	componentVariances,
	combineVariances,
	divideUnits,
	intervalUnit,
	type Component,
	type Quantity,
	type Source,
	type Uncertainty
} from '$lib/quantities';
import { compensatedSum } from '$lib/statistics';
import { leastSquares, noSpread, readingVariances, weightedLine, type Sums, type Through } from './line-sums';
import type { FitOptions, FitPolicy } from './fit-types';
import { square } from './fit-curve';
import { FitProblem } from './problems';
import { chiSquaredOf } from './stated';

export interface LineOptions extends FitOptions {
	/** 'origin': y = slope * x, with one parameter; the intercept is exactly zero */
	through?: Through;
}

export interface LineFit {
	/** of the fit's options; the component of its scatter is this and `:scatter` */
	readonly id: string;
	readonly points: number;
	readonly degreesOfFreedom: number;
	readonly policy: FitPolicy;
	readonly slope: Quantity;
	readonly intercept: Quantity;
	/** the line's value at `centreX`: uncorrelated with the slope as far as the scatter goes */
	readonly centre: Quantity;
	readonly centreX: number;
	/** sum of the weighted squares of x about its centre, SI */
	readonly spreadX: number;
	/** y - line at each point, SI, in the order of the points */
	readonly residuals: readonly number[];
	/** how far each point pulls the line to itself, 0 to 1; their sum is the number of parameters */
	readonly leverage: readonly number[];
	/** of slope and intercept by the fit's policy alone (scatter, or stated reading-scope parts), SI */
	readonly covariance: number;
	/** of unit weight, in the unit of y when weights are equal; null when no degree of freedom is left */
	readonly residualStandardDeviation: number | null;
	/** against the stated reading-scope uncertainty; null when some point states none */
	readonly chiSquared: number | null;
}

/**
 * Straight line y = intercept + slope * x by least squares over quantities. Centred sums keep the digits where
 * x varies little against its size, as 1/T does. Slope and intercept keep the linear parts of every shared
 * source of both axes, so that whatever is computed from both is right without a covariance at hand.
 * @throws FitProblem where the points do not determine a line
 */
export function fitLine(x: readonly Quantity[], y: readonly Quantity[], options: LineOptions): LineFit {
	const xs = x.map((quantity) => quantity.value);
	const ys = y.map((quantity) => quantity.value);
	const through = options.through ?? 'free';
	requireEnough(xs, options.policy, through);
	const equal = leastSquares(xs, ys, xs.map(() => 1), through); // prettier-ignore
	const sums = options.weights === 'stated' ? weightedLine(x, y, xs, ys, equal, through) : equal;
	const degreesOfFreedom = xs.length - (through === 'origin' ? 1 : 2);
	const scatter = compensatedSum(sums.residuals.map((r, i) => (sums.w[i] ?? 0) * r * r));
	const deviation = degreesOfFreedom > 0 ? Math.sqrt(scatter / degreesOfFreedom) : null;

	if (
		!Number.isFinite(sums.slope) ||
		!Number.isFinite(scatter) ||
		!Number.isFinite(sums.slope * sums.centreX)
	) {
		throw new FitProblem(
			'not-finite',
			'Some point lies so far out that no line can be computed. Look for it.'
		);
	}

	const slopeParts = new Map<Source, number>();
	const centreParts = new Map<Source, number>();
	const kept = (source: Source) => options.policy === 'stated' || source.component.scope !== 'reading';
	sums.residuals.forEach((residual, i) => {
		const w = sums.w[i] ?? 0;
		const dx = sums.dx[i] ?? 0;
		// derivatives of the slope and of the line's height at the centre towards y_i and x_i, weights held
		const slopeByY = (w * dx) / sums.xx;
		const slopeByX = (w * (residual - sums.slope * dx)) / sums.xx;
		const height = w / sums.total;
		for (const [source, part] of y[i]?.parts ?? []) {
			if (!kept(source)) continue;
			addPart(slopeParts, source, slopeByY * part);
			addPart(centreParts, source, height * part);
		}
		for (const [source, part] of x[i]?.parts ?? []) {
			if (!kept(source)) continue;
			addPart(slopeParts, source, slopeByX * part);
			addPart(centreParts, source, -sums.slope * height * part);
		}
	});
	const scattered: Source[] = [];
	if (options.policy === 'scatter' && deviation !== null && deviation > 0) {
		const component: Component = {
			id: `${options.id}:scatter`,
			label: options.scatterLabel,
			scope: 'run',
			degreesOfFreedom
		};
		// height at the centre and slope are independent; both rest on one variance estimate, hence one component
		scattered.push({ component }, { component });
		addPart(centreParts, scattered[0] ?? { component }, deviation / Math.sqrt(sums.total));
		addPart(slopeParts, scattered[1] ?? { component }, deviation / Math.sqrt(sums.xx));
	}
	return {
		id: options.id,
		points: xs.length,
		degreesOfFreedom,
		policy: options.policy,
		...told(x, y, sums, slopeParts, centreParts),
		centreX: sums.centreX,
		spreadX: sums.xx,
		residuals: sums.residuals,
		leverage: sums.dx.map((d, i) => (sums.w[i] ?? 0) * (1 / sums.total + (d * d) / sums.xx)),
		covariance: ownCovariance(slopeParts, centreParts, sums.centreX, options.policy, new Set(scattered)),
		residualStandardDeviation: deviation,
		chiSquared: chiSquaredOf(sums.residuals, readingVariances(x, y, sums.slope))
	};
}

/** Slope, height at the centre and intercept as quantities. */
function told(
	x: readonly Quantity[],
	y: readonly Quantity[],
	sums: Sums,
	slopeParts: Map<Source, number>,
	centreParts: Map<Source, number>
): Pick<LineFit, 'slope' | 'centre' | 'intercept'> {
	const firstX = x[0];
	const firstY = y[0];
	if (!firstX || !firstY) throw new FitProblem('too-few-points', 'No points, so there is no line.');
	const slopeUnit = divideUnits(firstY.unit, firstX.unit);
	const centre: Quantity = {
		value: sums.centreY,
		dimension: firstY.dimension,
		unit: intervalUnit(firstY.unit),
		point: false,
		parts: centreParts
	};
	const interceptParts = new Map(centreParts);
	for (const [source, part] of slopeParts) addPart(interceptParts, source, -sums.centreX * part);
	return {
		slope: {
			value: sums.slope,
			dimension: slopeUnit.dimension,
			unit: slopeUnit,
			point: false,
			parts: slopeParts
		},
		centre,
		intercept: { ...centre, value: sums.centreY - sums.slope * sums.centreX, parts: interceptParts }
	};
}

/** Covariance of slope and intercept from the scatter, or from the readings' own parts. */
function ownCovariance(
	slopeParts: ReadonlyMap<Source, number>,
	centreParts: ReadonlyMap<Source, number>,
	centreX: number,
	policy: FitPolicy,
	scattered: ReadonlySet<Source>
): number {
	let sum = 0;
	for (const [source, part] of slopeParts) {
		const own = policy === 'scatter' ? scattered.has(source) : source.component.scope === 'reading';
		if (own) sum += part * ((centreParts.get(source) ?? 0) - centreX * part);
	}
	return sum;
}

function requireEnough(xs: readonly number[], policy: FitPolicy, through: Through): void {
	if (xs.length === 0) throw new FitProblem('too-few-points', 'No points yet.');
	if (through === 'origin') {
		if (xs.length === 1 && policy === 'scatter') {
			throw new FitProblem('too-few-points', 'One point leaves no scatter. Add one.');
		}
		if (xs.every((value) => value === 0)) throw noSpread(through);
		return;
	}
	if (xs.length === 1) throw new FitProblem('too-few-points', 'One point has no line. Add two.');
	if (xs.length === 2 && policy === 'scatter') {
		throw new FitProblem('too-few-points', 'Two points leave no scatter. Add one.');
	}
	if (xs.every((value) => value === xs[0])) throw noSpread(through);
}

/**
 * The line's value and its uncertainty at any x (SI), from the components of height and slope alone: as cheap at the
 * hundredth x as at the first, however many readings stand behind the line.
 */
export function lineAt(fit: LineFit): (x: number) => { value: number } & Uncertainty {
	return bandOf(fit, 0);
}

/** Where another reading of unit weight would fall: the line's own uncertainty and the scatter about it (policy 'scatter'). */
export function nextReadingAt(fit: LineFit): (x: number) => { value: number } & Uncertainty {
	return bandOf(fit, fit.policy === 'scatter' ? square(fit.residualStandardDeviation ?? 0) : 0);
}

function bandOf(fit: LineFit, scatter: number): (x: number) => { value: number } & Uncertainty {
	const heights = componentVariances(fit.centre.parts);
	const slopes = componentVariances(fit.slope.parts);
	const mixed = new Map<Component, number>();
	for (const [source, part] of fit.slope.parts) {
		const height = fit.centre.parts.get(source);
		if (height !== undefined) mixed.set(source.component, (mixed.get(source.component) ?? 0) + height * part);
	}
	return (x) => {
		const dx = x - fit.centreX;
		const variances = new Map<Component, number>();
		for (const component of new Set([...heights.keys(), ...slopes.keys()])) {
			const size =
				(heights.get(component) ?? 0) +
				2 * dx * (mixed.get(component) ?? 0) +
				dx * dx * (slopes.get(component) ?? 0) +
				(component.id === `${fit.id}:scatter` ? scatter : 0);
			variances.set(component, Math.max(0, size));
		}
		return { value: fit.centre.value + fit.slope.value * dx, ...combineVariances(variances) };
	};
}
