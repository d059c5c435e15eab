import {
	multiply,
	parseUnit,
	plainNumber,
	pow,
	power,
	toldIn,
	type Component,
	type LinearParts,
	type Quantity,
	type Source,
	type Uncertainty
} from '$lib/quantities';
import {
	dual,
	fitBothAxes,
	fitLine,
	fitLinear,
	fitNonlinear,
	fitPolynomial,
	lineAt,
	type FitOptions,
	type LineFit,
	type Model,
	type ModelFit
} from '$lib/regression';
import { inputLeaves, modelOf } from './model';
import type { FitDefinition } from './types';

/** What is fitted: one value a row in each list. */
export interface Points {
	x: readonly Quantity[];
	y: readonly Quantity[];
	/** of a linear model, one list for each term */
	terms: readonly (readonly Quantity[])[];
	/** of a curve: one list for each leaf of its formula that is no parameter */
	inputs: readonly (readonly Quantity[])[];
	/** relative weights; null where the fit's own kind of weights holds */
	weights: readonly number[] | null;
	/** of a curve: where the search begins */
	starts: readonly Quantity[];
}

/** A fit of any kind, as everything that shows it needs it. */
export interface Fit {
	points: number;
	degreesOfFreedom: number;
	/** in the definition's order, told in its units */
	parameters: readonly Quantity[];
	/** y - fit at each point, SI */
	residuals: readonly number[];
	residualStandardDeviation: number | null;
	chiSquared: number | null;
	iterations: number;
	/** a straight line's own sums, for its sample calculation; null for other kinds */
	line: LineFit | null;
	/** the fit at an x in SI; null where x alone does not tell it */
	at: ((x: number) => { value: number } & Uncertainty) | null;
}

/**
 * Fits the points as the definition says.
 * @throws FitProblem in words a student understands
 */
export function fitPoints(definition: FitDefinition, points: Points, id: string): Fit {
	const options: FitOptions = {
		id,
		scatterLabel: `Scatter about the ${definition.model === 'curve' ? 'curve' : 'line'} (${definition.label})`,
		policy: definition.policy,
		weights: definition.weights === 'stated' ? 'stated' : 'equal'
	};
	const told = (parameters: readonly Quantity[]) =>
		parameters.map((quantity, i) => toldIn(quantity, parseUnit(definition.parameters[i]?.unit ?? '1')));
	const straight = definition.model === 'line' || definition.model === 'origin';
	if (straight && points.weights === null) {
		const through = definition.model === 'origin' ? 'origin' : 'free';
		const line = fitLine(points.x, points.y, { ...options, through });
		return { ...lineResults(line), parameters: told(lineParameters(line, definition)) };
	}
	if (definition.model === 'both-axes') {
		const line = fitBothAxes(points.x, points.y, {}, options);
		const parameters = told([line.slope, line.intercept]);
		return { ...lineResults(line), line: null, iterations: line.iterations, parameters };
	}
	const fit = modelFit(definition, points, options);
	return { ...fit, parameters: told(fit.parameters), line: null };
}

function lineParameters(line: LineFit, { model }: FitDefinition): Quantity[] {
	return model === 'origin' ? [line.slope] : [line.slope, line.intercept];
}

function lineResults(line: LineFit): Omit<Fit, 'parameters'> {
	const { points, degreesOfFreedom, residuals, residualStandardDeviation, chiSquared } = line;
	return {
		points,
		degreesOfFreedom,
		residuals,
		residualStandardDeviation,
		chiSquared,
		iterations: 0,
		line,
		at: lineAt(line)
	};
}

/**
 * A model in several parameters. Relative weights multiply both sides by their roots, which is the same problem with
 * equal weights; residuals are told without them.
 */
function modelFit(definition: FitDefinition, points: Points, options: FitOptions): Omit<Fit, 'line'> {
	const roots = points.weights?.map(Math.sqrt) ?? null;
	const root = (i: number) => plainNumber(roots?.[i] ?? 1);
	const weigh = (values: readonly Quantity[]) =>
		roots ? values.map((value, i) => multiply(value, root(i))) : values;
	const ones = points.y.map((_, i) => root(i));
	const y = weigh(points.y);
	const unweighed = (fit: ModelFit) => fit.residuals.map((residual, i) => residual / (roots?.[i] ?? 1));
	const common = (fit: ModelFit): Omit<Fit, 'line' | 'at'> => ({
		points: fit.points,
		degreesOfFreedom: fit.degreesOfFreedom,
		parameters: fit.parameters,
		residuals: unweighed(fit),
		residualStandardDeviation: fit.residualStandardDeviation,
		chiSquared: fit.chiSquared,
		iterations: fit.iterations
	});
	switch (definition.model) {
		case 'curve': {
			const model = modelOf(definition);
			const weighed: Model = (parameters, inputs) => {
				const [first, ...others] = inputs;
				return first ? dual.multiply(first, model(parameters, others)) : dual.constant(NaN);
			};
			const fit = roots
				? fitNonlinear(weighed, [ones, ...points.inputs], y, points.starts, options)
				: fitNonlinear(model, points.inputs, y, points.starts, options);
			const others = points.inputs.map((column) => column[0]?.value ?? 0);
			const place = inputLeaves(definition).findIndex(
				(leaf) => leaf.op === 'column' && leaf.column === definition.x
			);
			const along = (x: number) => others.map((value, k) => (k === place ? x : value));
			return { ...common(fit), at: (x) => fit.at(roots ? [1, ...along(x)] : along(x)) };
		}
		case 'linear': {
			const fit = fitLinear(points.terms.map(weigh), y, options);
			return { ...common(fit), at: null };
		}
		case 'polynomial':
			if (roots === null) {
				const fit = fitPolynomial(points.x, y, definition.parameters.length - 1, options);
				return { ...common(fit), at: (x) => fit.at([x]) };
			}
			return weighedPowers(definition.parameters.length, points, ones, y, options, common);
		default:
			return weighedPowers(
				definition.model === 'origin' ? 1 : 2,
				points,
				ones,
				y,
				options,
				common,
				definition.model
			);
	}
}

/** Powers of x under relative weights, told highest first for lines. */
function weighedPowers(
	count: number,
	{ x }: Points,
	ones: readonly Quantity[],
	y: readonly Quantity[],
	options: FitOptions,
	common: (fit: ModelFit) => Omit<Fit, 'line' | 'at'>,
	model: FitDefinition['model'] = 'polynomial'
): Omit<Fit, 'line'> {
	const powers =
		model === 'origin' ? [1] : model === 'line' ? [1, 0] : Array.from({ length: count }, (_, k) => k);
	const raise = (value: Quantity, k: number) => (k === 0 ? plainNumber(1) : power(value, plainNumber(k)));
	const columns = powers.map((k) =>
		x.map((value, i) => multiply(ones[i] ?? plainNumber(1), raise(value, k)))
	);
	const fit = fitLinear(columns, y, options);
	const at = (place: number) => fit.at(powers.map((k) => pow(place, k)));
	return { ...common(fit), at };
}

/**
 * In a table of runs, what each run has of its own is what each reading has of its own in a table of readings. The points
 * go into the fit under that name, and what comes out carries the sources' own again. `own` tells them.
 */
export class OwnOfRuns {
	private readonly sources = new Map<Source, Source>();
	private readonly back = new Map<Source, Source>();
	private readonly components = new Map<Component, Component>();

	constructor(private readonly own: (source: Source) => boolean) {}

	enter(quantity: Quantity): Quantity {
		return { ...quantity, parts: translated(quantity.parts, (source) => this.asReading(source)) };
	}

	leave(quantity: Quantity): Quantity {
		return { ...quantity, parts: translated(quantity.parts, (source) => this.back.get(source) ?? source) };
	}

	private asReading(source: Source): Source {
		if (source.component.scope === 'reading' || !this.own(source)) return source;
		const known = this.sources.get(source);
		if (known) return known;
		let component = this.components.get(source.component);
		if (!component) {
			component = { ...source.component, scope: 'reading' };
			this.components.set(source.component, component);
		}
		const own: Source = { component };
		this.sources.set(source, own);
		this.back.set(own, source);
		return own;
	}
}

function translated(parts: LinearParts, by: (source: Source) => Source): LinearParts {
	return new Map([...parts].map(([source, part]) => [by(source), part]));
}
