import {
	addPart,
	exactly,
	maximum,
	mean,
	minimum,
	multiplyUnits,
	plainNumber,
	propagate,
	QuantityProblem,
	sameDimension,
	standardDeviation,
	subtract,
	sum,
	type Component,
	type LinearParts,
	type Quantity,
	type Scope,
	type Source
} from '$lib/quantities';
import type { Policy } from './types';

/** How a mean treats what is drawn anew in each row. */
export interface Averaging {
	policy: Policy;
	/** scopes that are drawn anew in each of its rows */
	anew: ReadonlySet<Scope>;
	/** makes the scatter's component unique, and names it in a budget */
	id: string;
	label: string;
	/** digital step of the readings, SI; it does not average away in repeats of one measurand */
	resolution: Source | null;
	/** standard uncertainty of the step, SI */
	resolutionSize: number;
}

/** A function of columns: `columns` hold one value a row, in the order of the rows; `places` are single values. */
export function combine(
	name: string,
	columns: readonly (readonly Quantity[])[],
	places: readonly Quantity[],
	averaging: Averaging
): Quantity {
	const [items = [], others = []] = columns;
	switch (name) {
		case 'mean':
			return averaging.policy === 'scatter' ? scatterMean(items, averaging) : mean(items);
		case 'weighted_mean':
			return weightedMean(items, averaging);
		case 'sum':
			return sum(items);
		case 'min':
			return minimum(items);
		case 'max':
			return maximum(items);
		case 'count':
			return plainNumber(items.length);
		case 's':
			return { ...standardDeviation(items), parts: new Map() };
		case 'initial':
			return there(items[0]);
		case 'final':
			return there(items.at(-1));
		case 'integral':
			return integral(items, others, there(places[0]), there(places[1]));
		case 'interpolate':
			return between(nodesOf(items, others), there(places[0]));
		default:
			throw new QuantityProblem('domain', `There is no function ${name}.`);
	}
}

function there(quantity: Quantity | undefined): Quantity {
	if (!quantity) throw new QuantityProblem('domain', 'There is no row to take it from.');
	return quantity;
}

/**
 * Mean whose independent parts are replaced by the scatter found, s/sqrt(n) with n - 1 degrees of freedom; a digital
 * step is added once, because it does not average away.
 */
function scatterMean(items: readonly Quantity[], averaging: Averaging): Quantity {
	const plain = mean(items);
	if (items.length < 2) {
		throw new QuantityProblem(
			'domain',
			'One value has no scatter, so its uncertainty is unknown. Add another.'
		);
	}
	const spread = standardDeviation(items.map((item) => ({ ...item, parts: new Map() }))).value;
	const parts = sharedParts(
		plain.parts,
		ownSources(
			items.map((item) => [item]),
			averaging.anew
		)
	);
	addPart(parts, scatterSource(averaging, items.length - 1), spread / Math.sqrt(items.length));
	if (averaging.resolution) addPart(parts, averaging.resolution, averaging.resolutionSize);
	return { ...plain, parts };
}

/** Mean weighted by 1/u^2 of what is drawn anew in each row; under 'scatter' its size comes from the scatter found. */
function weightedMean(items: readonly Quantity[], averaging: Averaging): Quantity {
	const first = there(items[0]);
	const own = ownSources(
		items.map((item) => [item]),
		averaging.anew
	);
	const weights = items.map((item) => {
		let size = 0;
		for (const [source, part] of item.parts) if (own(source)) size += part * part;
		if (!(size > 0)) {
			throw new QuantityProblem('domain', 'A weighted mean wants an uncertainty for every value.');
		}
		return 1 / size;
	});
	const total = weights.reduce((all, weight) => all + weight, 0);
	const value = items.reduce((all, item, i) => all + ((weights[i] ?? 0) / total) * item.value, 0);
	const inputs = items.map((item, i) => [item, (weights[i] ?? 0) / total] as const);
	const plain = propagate(value, first.dimension, inputs, first.unit, first.point);
	if (averaging.policy === 'stated') return plain;
	const freedom = items.length - 1;
	if (freedom < 1) throw new QuantityProblem('domain', 'One value has no scatter. Add another.');
	const squares = items.reduce(
		(all, item, i) => all + (weights[i] ?? 0) * (item.value - value) * (item.value - value),
		0
	);
	const parts = sharedParts(plain.parts, own);
	addPart(parts, scatterSource(averaging, freedom), Math.sqrt(squares / freedom / total));
	return { ...plain, parts };
}

function sharedParts(parts: LinearParts, own: (source: Source) => boolean): Map<Source, number> {
	return new Map([...parts].filter(([source]) => !own(source)));
}

/**
 * Tells the sources that each item has for itself; an item may be several quantities, the axes of a point. A reading's own
 * always are; what a run has of its own only while it stands in one item: the scatter behind a calibration is a run's too,
 * and shared by all that rest on it.
 */
export function ownSources(
	items: readonly (readonly Quantity[])[],
	anew: ReadonlySet<Scope>
): (source: Source) => boolean {
	if (!anew.has('run')) return (source) => anew.has(source.component.scope);
	const seenIn = new Map<Source, number>();
	const shared = new Set<Source>();
	items.forEach((item, i) => {
		for (const { parts } of item) {
			for (const source of parts.keys()) {
				if (source.component.scope !== 'run') continue;
				if ((seenIn.get(source) ?? i) === i) seenIn.set(source, i);
				else shared.add(source);
			}
		}
	});
	return (source) => {
		const { scope } = source.component;
		return scope === 'run' ? seenIn.has(source) && !shared.has(source) : anew.has(scope);
	};
}

function scatterSource({ id, label }: Averaging, degreesOfFreedom: number): Source {
	const component: Component = { id: `${id}:scatter`, label, scope: 'run', degreesOfFreedom };
	return { component };
}

interface Node {
	x: Quantity;
	y: Quantity;
}

/** Ascending in x. */
function nodesOf(y: readonly Quantity[], x: readonly Quantity[]): Node[] {
	const nodes = x.flatMap((at, i): Node[] => {
		const value = y[i];
		return value ? [{ x: at, y: value }] : [];
	});
	nodes.sort((a, b) => a.x.value - b.x.value);
	nodes.forEach((node, i) => {
		if (nodes[i + 1]?.x.value === node.x.value) {
			throw new QuantityProblem('domain', 'Two rows stand at the same place. Look for the one read twice.');
		}
	});
	return nodes;
}

/** y where x is `at`, on the straight piece between its neighbours; nothing beyond the ends. */
function between(nodes: readonly Node[], at: Quantity): Quantity {
	const right = nodes.findIndex(({ x }) => x.value >= at.value);
	const high = nodes[right];
	const low = nodes[right - 1] ?? (high?.x.value === at.value ? nodes[right + 1] : undefined);
	if (!high || !low) {
		throw new QuantityProblem('domain', 'The readings do not reach that far. Take more, or ask for less.');
	}
	if (!sameDimension(high.x.dimension, at.dimension)) {
		throw new QuantityProblem('dimension', 'The place asked for is of another kind than the readings.');
	}
	const width = high.x.value - low.x.value;
	const slope = (high.y.value - low.y.value) / width;
	const share = (at.value - low.x.value) / width;
	const value = low.y.value + slope * (at.value - low.x.value);
	const inputs = [[low.y, 1 - share], [high.y, share], [low.x, -slope * (1 - share)], [high.x, -slope * share], [at, slope]] as const; // prettier-ignore
	return propagate(value, high.y.dimension, inputs, high.y.unit, high.y.point);
}

/** Integral of y over x from a to b by trapezoids; the ends lie on the pieces between rows. */
function integral(y: readonly Quantity[], x: readonly Quantity[], a: Quantity, b: Quantity): Quantity {
	if (!(a.value < b.value)) throw new QuantityProblem('domain', 'The integral ends before it begins.');
	if (y.some((each) => each.point)) {
		throw new QuantityProblem('temperature-points', 'Integrate thermodynamic temperatures: kelvin(t).');
	}
	const nodes = nodesOf(y, x);
	const path: Node[] = [
		{ x: a, y: between(nodes, a) },
		...nodes.filter((node) => node.x.value > a.value && node.x.value < b.value),
		{ x: b, y: between(nodes, b) }
	];
	let value = 0;
	const inputs: [Quantity, number][] = [];
	path.forEach((node, i) => {
		const before = path[i - 1] ?? node;
		const after = path[i + 1] ?? node;
		inputs.push([node.y, (after.x.value - before.x.value) / 2]);
		// at the ends half the neighbours' sum, inside half the neighbours' difference
		const atEnd = before === node || after === node;
		const half = (before.y.value - after.y.value) / 2;
		const slope = !atEnd ? half : before === node ? -(node.y.value + after.y.value) / 2 : (before.y.value + node.y.value) / 2; // prettier-ignore
		inputs.push([node.x, slope]);
		value += ((after.x.value - node.x.value) * (after.y.value + node.y.value)) / 2;
	});
	const unit = multiplyUnits(there(y[0]).unit, subtract(b, a).unit);
	return propagate(value, exactly(1, unit).dimension, inputs, unit);
}
