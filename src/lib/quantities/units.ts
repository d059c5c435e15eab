import {
	dimensionless,
	multiplyDimensions,
	raiseDimension,
	sameDimension,
	type Dimension
} from './dimension';
import { pow } from './elementary';
import { QuantityProblem } from './problems';
import { entryOf, UnitReader, type UnitFactor } from './unit-reader';
import { prefixFactors } from './unit-table';

/** SI value = value * factor + offset. The offset is zero but for a scale of temperature standing alone. */
export interface Unit {
	factors: readonly UnitFactor[];
	factor: number;
	offset: number;
	dimension: Dimension;
}

export const unitOne: Unit = { factors: [], factor: 1, offset: 0, dimension: dimensionless };

const cache = new Map<string, Unit>();
const mostRemembered = 2000;

/**
 * Reads 'kJ/mol', 'J/(mol K)', 'J mol-1 K-1', 'J mol^-1 K^-1', '1/K', '°C', '%', '1' and ''.
 * After a slash stands one factor or a parenthesis: 'J/mol K' is refused because it can be read in two ways.
 */
export function parseUnit(text: string): Unit {
	const known = cache.get(text);
	if (known) return known;
	const unit = composeUnit(new UnitReader(text).read());
	// whoever types thousands of units on purpose fills no memory with them
	if (cache.size >= mostRemembered) cache.clear();
	cache.set(text, unit);
	return unit;
}

/** Puts factors together; equal symbols are merged and those that cancel disappear. */
export function composeUnit(factors: readonly UnitFactor[]): Unit {
	const merged: UnitFactor[] = [];
	for (const factor of factors) {
		if (factor.base === '1') continue;
		const at = merged.findIndex((other) => other.symbol === factor.symbol);
		const before = merged[at];
		if (before) merged[at] = { ...before, exponent: before.exponent + factor.exponent };
		else merged.push(factor);
	}
	const kept = merged.filter((factor) => factor.exponent !== 0);
	let numerator = 1;
	let denominator = 1;
	let dimension = dimensionless;
	for (const { prefix, base, exponent } of kept) {
		const entry = entryOf(base);
		const size = entry.factor * (prefixFactors[prefix]?.[0] ?? 1);
		// numerator and denominator apart: dividing once keeps '1/min' and the like correctly rounded
		if (exponent > 0) numerator *= raised(size, exponent);
		else denominator *= raised(size, -exponent);
		dimension = multiplyDimensions(dimension, raiseDimension(entry.dimension, exponent));
	}
	const alone = kept.length === 1 && kept[0]?.exponent === 1 ? kept[0] : undefined;
	const offset = alone ? (entryOf(alone.base).offset ?? 0) : 0;
	const factor = numerator / denominator;
	if (!(factor > 0 && factor < Infinity)) {
		throw new QuantityProblem('not-finite', 'A unit to such a power is beyond all numbers.');
	}
	return { factors: kept, factor, offset, dimension };
}

function raised(size: number, exponent: number): number {
	if (exponent > 16) return pow(size, exponent);
	let product = 1;
	const whole = Math.floor(exponent);
	for (let i = 0; i < whole; i += 1) product *= size;
	return exponent === whole ? product : product * pow(size, exponent - whole);
}

const quotients = new WeakMap<Unit, WeakMap<Unit, Unit>>();
const products = new WeakMap<Unit, WeakMap<Unit, Unit>>();

export function divideUnits(a: Unit, b: Unit): Unit {
	return remembered(quotients, a, b, () => [
		...a.factors,
		...b.factors.map((factor) => ({ ...factor, exponent: -factor.exponent }))
	]);
}

export function multiplyUnits(a: Unit, b: Unit): Unit {
	return remembered(products, a, b, () => [...a.factors, ...b.factors]);
}

const powers = new WeakMap<Unit, Map<number, Unit>>();

/** The unit of a power; `dimension` is the power's, for which a coherent unit stands in where exponents grow unwieldy. */
export function raiseUnit(unit: Unit, exponent: number, dimension: Dimension): Unit {
	const before = powers.get(unit)?.get(exponent);
	if (before) return before;
	const factors = unit.factors.map((factor) => ({ ...factor, exponent: factor.exponent * exponent }));
	// halves are written as they are, m^0.5; a third would be an endless decimal
	const tidy = factors.every((factor) => Number.isInteger(2 * factor.exponent));
	const result = tidy ? composeUnit(factors.map(asInterval)) : coherentUnit(dimension);
	const known = powers.get(unit);
	if (known && known.size < mostRemembered) known.set(exponent, result);
	else powers.set(unit, new Map([[exponent, result]]));
	return result;
}

/** The same few units meet in every row of a table, so each pair is put together once. */
function remembered(
	store: WeakMap<Unit, WeakMap<Unit, Unit>>,
	a: Unit,
	b: Unit,
	factors: () => UnitFactor[]
): Unit {
	const row = store.get(a) ?? new WeakMap<Unit, Unit>();
	store.set(a, row);
	const known = row.get(b);
	if (known) return known;
	const unit = composeUnit(factors().map(asInterval));
	row.set(b, unit);
	return unit;
}

/** A degree of a scale inside a product is an interval, hence a kelvin. */
function asInterval(factor: UnitFactor): UnitFactor {
	return factor.base === 'degC' ? { ...factor, symbol: 'K', base: 'K' } : factor;
}

/** The unit in which differences and uncertainties are told: kelvins for a temperature in degrees Celsius. */
export function intervalUnit(unit: Unit): Unit {
	return unit.offset === 0 ? unit : multiplyUnits(unit, unitOne);
}

/** A coherent SI unit of the dimension, for what has no unit of its own. */
export function coherentUnit(dimension: Dimension): Unit {
	for (const text of ['1', 'Pa', 'J', 'J/mol', 'J/(mol K)', 'J/K', 'V', 'N', 'W']) {
		const unit = parseUnit(text);
		if (sameDimension(unit.dimension, dimension)) return unit;
	}
	const symbols = ['m', 'kg', 's', 'A', 'K', 'mol', 'cd'];
	const factors = symbols.flatMap((symbol, i) => {
		const exponent = dimension[i] ?? 0;
		if (exponent === 0) return [];
		return [{ symbol, prefix: symbol === 'kg' ? 'k' : '', base: symbol === 'kg' ? 'g' : symbol, exponent }];
	});
	return composeUnit(factors);
}

export function compatibleUnits(a: Unit, b: Unit): boolean {
	return sameDimension(a.dimension, b.dimension);
}
