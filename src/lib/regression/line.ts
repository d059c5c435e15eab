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
import { FitProblem } from './problems';

/**
 * 'scatter': what the readings' own (reading-scope) uncertainty says is replaced by the residual scatter with n - 2
 * degrees of freedom. 'stated': it is kept and chi-squared tells whether it was believable. Which one is decided
 * beforehand: the larger of the two after seeing the data has the wrong coverage. Shared deviations always propagate.
 */
export type FitPolicy = 'scatter' | 'stated';

/** 'stated': weights 1/u2 of the residual from the reading-scope parts of both axes (effective variance). */
export type FitWeights = 'equal' | 'stated';

export interface LineOptions {
	/** makes the scatter's component unique, e.g. the fit's name */
	id: string;
	/** how a budget names the scatter about the line */
	scatterLabel: string;
	policy: FitPolicy;
	weights: FitWeights;
}

export interface LineFit {
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
	/** of unit weight, in the unit of y when weights are equal; null when n = 2 */
	readonly residualStandardDeviation: number | null;
	/** against the stated reading-scope uncertainty; null when some point states none */
	readonly chiSquared: number | null;
}

interface Sums {
	w: readonly number[];
	total: number;
	centreX: number;
	centreY: number;
	dx: readonly number[];
	dy: readonly number[];
	xx: number;
	slope: number;
	residuals: readonly number[];
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
	requireEnough(xs, options.policy);
	const equal = leastSquares(xs, ys, xs.map(() => 1)); // prettier-ignore
	const sums = options.weights === 'stated' ? weighted(x, y, xs, ys, equal) : equal;
	const degreesOfFreedom = xs.length - 2;
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
	if (options.policy === 'scatter' && deviation !== null && deviation > 0) {
		const component: Component = {
			id: `${options.id}:scatter`,
			label: options.scatterLabel,
			scope: 'run',
			degreesOfFreedom
		};
		// height at the centre and slope are independent; both rest on one variance estimate, hence one component
		addPart(centreParts, { component }, deviation / Math.sqrt(sums.total));
		addPart(slopeParts, { component }, deviation / Math.sqrt(sums.xx));
	}
	return assemble(x, y, sums, slopeParts, centreParts, { ...options, degreesOfFreedom, deviation });
}

function assemble(
	x: readonly Quantity[],
	y: readonly Quantity[],
	sums: Sums,
	slopeParts: Map<Source, number>,
	centreParts: Map<Source, number>,
	{
		policy,
		degreesOfFreedom,
		deviation
	}: LineOptions & { degreesOfFreedom: number; deviation: number | null }
): LineFit {
	const firstX = x[0];
	const firstY = y[0];
	if (!firstX || !firstY) throw new FitProblem('too-few-points', 'No points, so there is no line.');
	const slopeUnit = divideUnits(firstY.unit, firstX.unit);
	const slope: Quantity = {
		value: sums.slope,
		dimension: slopeUnit.dimension,
		unit: slopeUnit,
		point: false,
		parts: slopeParts
	};
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
		points: x.length,
		degreesOfFreedom,
		policy,
		slope,
		intercept: { ...centre, value: sums.centreY - sums.slope * sums.centreX, parts: interceptParts },
		centre,
		centreX: sums.centreX,
		spreadX: sums.xx,
		residuals: sums.residuals,
		residualStandardDeviation: deviation,
		chiSquared: chiSquared(x, y, sums)
	};
}

function requireEnough(xs: readonly number[], policy: FitPolicy): void {
	if (xs.length === 0) throw new FitProblem('too-few-points', 'No points yet.');
	if (xs.length === 1) throw new FitProblem('too-few-points', 'One point has no line. Add two.');
	if (xs.length === 2 && policy === 'scatter') {
		throw new FitProblem('too-few-points', 'Two points leave no scatter. Add one.');
	}
	if (xs.every((value) => value === xs[0])) {
		throw new FitProblem(
			'no-spread',
			'All points have the same x, so there is no line through them. Vary it.'
		);
	}
}

function leastSquares(xs: readonly number[], ys: readonly number[], w: readonly number[]): Sums {
	const total = compensatedSum(w);
	const centreX = centreOf(xs, w, total);
	const centreY = centreOf(ys, w, total);
	const dx = xs.map((value) => value - centreX);
	const dy = ys.map((value) => value - centreY);
	const xx = compensatedSum(dx.map((d, i) => (w[i] ?? 0) * d * d));
	const xy = compensatedSum(dx.map((d, i) => (w[i] ?? 0) * d * (dy[i] ?? 0)));
	if (!(xx > 0))
		throw new FitProblem(
			'no-spread',
			'All points have the same x, so there is no line through them. Vary it.'
		);
	const slope = xy / xx;
	return {
		w,
		total,
		centreX,
		centreY,
		dx,
		dy,
		xx,
		slope,
		residuals: dx.map((d, i) => (dy[i] ?? 0) - slope * d)
	};
}

/** Weighted mean, corrected once by the mean of what is left: rounding of the first pass drops out. */
function centreOf(values: readonly number[], w: readonly number[], total: number): number {
	const first = compensatedSum(values.map((value, i) => (w[i] ?? 0) * value)) / total;
	return first + compensatedSum(values.map((value, i) => (w[i] ?? 0) * (value - first))) / total;
}

/** Effective variance: the weights depend on the slope, so it is repeated until the slope stands (a few rounds). */
function weighted(
	x: readonly Quantity[],
	y: readonly Quantity[],
	xs: readonly number[],
	ys: readonly number[],
	start: Sums
): Sums {
	let sums = start;
	for (let round = 0; round < 50; round += 1) {
		const variances = readingVariances(x, y, sums.slope);
		if (variances.some((size) => !(size > 0))) {
			throw new FitProblem(
				'no-stated-uncertainty',
				'A weighted line wants an uncertainty for every reading. State it in the columns.'
			);
		}
		const next = leastSquares(xs, ys, variances.map((size) => 1 / size)); // prettier-ignore
		const settled = Math.abs(next.slope - sums.slope) <= 1e-14 * Math.abs(next.slope);
		sums = next;
		if (settled) break;
	}
	return sums;
}

/** Variance of y - slope * x at each point from its reading-scope parts alone. */
function readingVariances(x: readonly Quantity[], y: readonly Quantity[], slope: number): number[] {
	return y.map((quantity, i) => {
		const parts = new Map<Source, number>();
		for (const [source, part] of quantity.parts)
			if (source.component.scope === 'reading') addPart(parts, source, part);
		for (const [source, part] of x[i]?.parts ?? []) {
			if (source.component.scope === 'reading') addPart(parts, source, -slope * part);
		}
		let size = 0;
		for (const part of parts.values()) size += part * part;
		return size;
	});
}

function chiSquared(x: readonly Quantity[], y: readonly Quantity[], sums: Sums): number | null {
	const variances = readingVariances(x, y, sums.slope);
	if (variances.some((size) => !(size > 0))) return null;
	return compensatedSum(sums.residuals.map((residual, i) => (residual * residual) / (variances[i] ?? 1)));
}

/**
 * The line's value and its uncertainty at any x (SI), from the components of height and slope alone: as cheap at the
 * hundredth x as at the first, however many readings stand behind the line.
 */
export function lineAt(fit: LineFit): (x: number) => { value: number } & Uncertainty {
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
				dx * dx * (slopes.get(component) ?? 0);
			variances.set(component, Math.max(0, size));
		}
		return { value: fit.centre.value + fit.slope.value * dx, ...combineVariances(variances) };
	};
}
