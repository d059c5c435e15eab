import {
	dimensionless,
	sameDimension,
	nameDimensionWithArticle,
	nameDimension,
	type Dimension
} from './dimension';
import { QuantityProblem } from './problems';
import { intervalUnit, unitOne, type Unit } from './units';

/** How far one deviation reaches: 'reading' is drawn anew each time, everything else is shared by all rows. */
export type Scope = 'reading' | 'run' | 'instrument' | 'session' | 'course';

/**
 * A component of uncertainty: one variance estimate with its degrees of freedom (Infinity when it is not an
 * estimate). Several sources may rest on it: the same thermometer's reading error in every row, or the two
 * independent parts of a fit's scatter. It is one line of a budget and one Welch-Satterthwaite term.
 */
export interface Component {
	readonly id: string;
	readonly label: string;
	readonly scope: Scope;
	readonly degreesOfFreedom: number;
}

/** One independent deviation. Sources are told apart by identity: the same object is the same deviation. */
export interface Source {
	readonly component: Component;
}

/** Source -> derivative towards it times its standard uncertainty, in the SI unit of the quantity. Zeros are left out. */
export type LinearParts = ReadonlyMap<Source, number>;

/** A value in its coherent SI unit with the linear parts of its uncertainty. */
export interface Quantity {
	readonly value: number;
	readonly dimension: Dimension;
	/** the unit it is told in */
	readonly unit: Unit;
	/** a point on a scale of temperature (25 degC), not a difference of temperatures (25 K) */
	readonly point: boolean;
	/** known to be a difference of temperatures, so that no scale can tell it; absent where nobody can know */
	readonly difference?: true;
	readonly parts: LinearParts;
}

/** Parts are squared and added: between these their squares are numbers still, neither overflowing nor vanishing. */
const largestPart = 1e150;
const smallestPart = 1e-150;

const noParts: LinearParts = new Map();

/** A quantity without uncertainty. `value` is in `unit`; on a scale of temperature it is a point. */
export function exactly(value: number, unit: Unit = unitOne): Quantity {
	return {
		value: value * unit.factor + unit.offset,
		dimension: unit.dimension,
		unit,
		point: unit.offset !== 0,
		parts: noParts
	};
}

/** Adds deviations to a quantity: pairs of a source and its standard uncertainty in the quantity's SI unit. */
export function withDeviations(
	quantity: Quantity,
	deviations: Iterable<readonly [Source, number]>
): Quantity {
	const parts = new Map(quantity.parts);
	for (const [source, size] of deviations) addPart(parts, source, size);
	return { ...quantity, parts };
}

export function addPart(parts: Map<Source, number>, source: Source, size: number): void {
	const sum = (parts.get(source) ?? 0) + size;
	if (sum === 0) parts.delete(source);
	else parts.set(source, sum);
}

/**
 * The one place where uncertainty propagates (GUM 5.2.2 in its linear-part form): every operation and every fit
 * gives its value and its derivatives towards its inputs. Correlations take care of themselves, because parts of
 * the same source add before they are squared; so x - x has no uncertainty at all.
 */
export function propagate(
	value: number,
	dimension: Dimension,
	inputs: Iterable<readonly [Quantity, number]>,
	unit: Unit,
	point = false
): Quantity {
	requireFinite(value);
	let parts: Map<Source, number> | null = null;
	for (const [input, derivative] of inputs) {
		if (derivative === 0 || input.parts.size === 0) continue;
		parts ??= new Map<Source, number>();
		addScaled(parts, input.parts, derivative);
	}
	return { value, dimension, unit, point, parts: parts ?? noParts };
}

/** `propagate` for one input, as most functions have it: every cell of every row comes through here. */
export function propagateOne(
	value: number,
	dimension: Dimension,
	input: Quantity,
	derivative: number,
	unit: Unit,
	point = false
): Quantity {
	requireFinite(value);
	return { value, dimension, unit, point, parts: scaled(input.parts, derivative) };
}

/** `propagate` for two inputs. */
export function propagateTwo(
	value: number,
	dimension: Dimension,
	a: Quantity,
	towardsA: number,
	b: Quantity,
	towardsB: number,
	unit: Unit,
	point = false
): Quantity {
	requireFinite(value);
	const [partsA, partsB] = [a.parts, b.parts];
	if (partsB.size === 0 || towardsB === 0) {
		return { value, dimension, unit, point, parts: scaled(partsA, towardsA) };
	}
	if (partsA.size === 0 || towardsA === 0) {
		return { value, dimension, unit, point, parts: scaled(partsB, towardsB) };
	}
	const parts = new Map<Source, number>();
	addScaled(parts, partsA, towardsA);
	addScaled(parts, partsB, towardsB);
	return { value, dimension, unit, point, parts };
}

function scaled(parts: LinearParts, derivative: number): LinearParts {
	if (parts.size === 0 || derivative === 0) return noParts;
	if (derivative === 1) return parts;
	const result = new Map<Source, number>();
	addScaled(result, parts, derivative);
	return result;
}

function addScaled(sums: Map<Source, number>, parts: LinearParts, derivative: number): void {
	for (const [source, part] of parts) {
		const size = derivative * part;
		if (!(Math.abs(size) < largestPart)) {
			throw new QuantityProblem('not-finite', 'The uncertainty of the result is beyond all numbers.');
		}
		if (Math.abs(size) > smallestPart) addPart(sums, source, size);
	}
}

function requireFinite(value: number): void {
	if (!Number.isFinite(value)) throw new QuantityProblem('not-finite', 'The result is not a finite number.');
}

/** Tells the quantity in another unit of the same dimension; the value itself does not change. */
export function toldIn(quantity: Quantity, unit: Unit): Quantity {
	if (quantity.unit === unit && unit.offset === 0) return quantity;
	if (!sameDimension(quantity.dimension, unit.dimension)) {
		throw new QuantityProblem(
			'dimension',
			`${capitalise(nameDimension(unit.dimension))} wanted; this is ${nameDimensionWithArticle(quantity.dimension)}.`
		);
	}
	if (unit.offset !== 0 && !quantity.point) {
		if (isDifference(quantity)) {
			throw new QuantityProblem(
				'temperature-points',
				'This is a difference of temperatures. Tell it in kelvins: on the Celsius scale it would be 273.15 off.'
			);
		}
		// An absolute temperature computed in kelvins is a point; whether a sum of differences is, nobody can know here.
		return { ...quantity, unit, point: true };
	}
	return { ...quantity, unit };
}

export function isDifference(quantity: Quantity): boolean {
	return quantity.difference === true;
}

export function markDifference(quantity: Quantity, mark: boolean): Quantity {
	return mark ? { ...quantity, difference: true } : quantity;
}

/** The value in its own unit. */
export function valueIn(quantity: Quantity, unit: Unit = quantity.unit): number {
	return (quantity.value - unit.offset) / unit.factor;
}

/** A standard uncertainty (or any difference), SI, in the given unit. */
export function differenceIn(size: number, unit: Unit): number {
	return size / intervalUnit(unit).factor;
}

export function covariance(a: Quantity, b: Quantity): number {
	const [few, many] = a.parts.size <= b.parts.size ? [a.parts, b.parts] : [b.parts, a.parts];
	let sum = 0;
	for (const [source, part] of few) sum += part * (many.get(source) ?? 0);
	return sum;
}

/** Correlation coefficient of two uncertain quantities; NaN where one is exact. */
export function correlation(a: Quantity, b: Quantity): number {
	return covariance(a, b) / Math.sqrt(variance(a) * variance(b));
}

export function variance(quantity: Quantity): number {
	let sum = 0;
	for (const part of quantity.parts.values()) sum += part * part;
	return sum;
}

export function standardUncertainty(quantity: Quantity): number {
	return Math.sqrt(variance(quantity));
}

export function isExact(quantity: Quantity): boolean {
	return quantity.parts.size === 0;
}

export function plainNumber(value: number): Quantity {
	return { value, dimension: dimensionless, unit: unitOne, point: false, parts: noParts };
}

function capitalise(words: string): string {
	return words.charAt(0).toUpperCase() + words.slice(1);
}
