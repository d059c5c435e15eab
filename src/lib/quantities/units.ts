import {
	dimensionless,
	multiplyDimensions,
	raiseDimension,
	sameDimension,
	type Dimension
} from './dimension';
import { pow } from './elementary';
import { QuantityProblem } from './problems';
import { prefixFactors, unitAliases, unitTable, type UnitEntry } from './unit-table';

export interface UnitFactor {
	/** with its prefix, as written: 'kJ' */
	symbol: string;
	prefix: string;
	/** key of the unit table: 'J' */
	base: string;
	exponent: number;
}

/** SI value = value * factor + offset. The offset is zero but for a scale of temperature standing alone. */
export interface Unit {
	factors: readonly UnitFactor[];
	factor: number;
	offset: number;
	dimension: Dimension;
}

export const unitOne: Unit = { factors: [], factor: 1, offset: 0, dimension: dimensionless };

const superscripts: Readonly<Record<string, string>> = {
	'⁻': '-',
	'¹': '1',
	'²': '2',
	'³': '3',
	'⁴': '4',
	'⁰': '0'
};

const cache = new Map<string, Unit>();

/**
 * Reads 'kJ/mol', 'J/(mol K)', 'J mol-1 K-1', 'J mol^-1 K^-1', '1/K', '°C', '%', '1' and ''.
 * After a slash stands one factor or a parenthesis: 'J/mol K' is refused because it can be read in two ways.
 */
export function parseUnit(text: string): Unit {
	const known = cache.get(text);
	if (known) return known;
	const unit = composeUnit(new UnitReader(text).read());
	cache.set(text, unit);
	return unit;
}

/** Whether a single symbol, prefix allowed, is in the table. */
export function isUnitSymbol(symbol: string): boolean {
	return findSymbol(symbol) !== null;
}

function findSymbol(typed: string): { symbol: string; prefix: string; base: string } | null {
	const alias = Object.hasOwn(unitAliases, typed) ? unitAliases[typed] : undefined;
	const symbol = alias ?? typed.replace(/^[µμ]/u, 'u');
	if (Object.hasOwn(unitTable, symbol)) return { symbol, prefix: '', base: symbol };
	const prefix = symbol.charAt(0);
	const base = symbol.slice(1);
	if (!Object.hasOwn(prefixFactors, prefix) || !Object.hasOwn(unitTable, base)) return null;
	return entryOf(base).prefixes?.includes(prefix) ? { symbol, prefix, base } : null;
}

export function entryOf(base: string): UnitEntry {
	const entry = Object.hasOwn(unitTable, base) ? unitTable[base] : undefined;
	if (!entry) throw new QuantityProblem('unknown-unit', `"${base}" is not a unit known here.`);
	return entry;
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
	return { factors: kept, factor: numerator / denominator, offset, dimension };
}

function raised(size: number, exponent: number): number {
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
	const known = powers.get(unit)?.get(exponent);
	if (known) return known;
	const factors = unit.factors.map((factor) => ({ ...factor, exponent: factor.exponent * exponent }));
	// halves are written as they are, m^0.5; a third would be an endless decimal
	const tidy = factors.every((factor) => Number.isInteger(2 * factor.exponent));
	const result = tidy ? composeUnit(factors.map(asInterval)) : coherentUnit(dimension);
	powers.set(unit, (powers.get(unit) ?? new Map<number, Unit>()).set(exponent, result));
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

class UnitReader {
	private readonly tokens: string[];
	private at = 0;

	constructor(private readonly text: string) {
		const plain = text
			// degrees Celsius with a space inside; an angle times a coulomb is nobody's unit
			.replace(/(?:°|º|deg)\s+[cC](?![\p{L}\d])/gu, 'degC')
			.replace(/[⁻¹²³⁴⁰]+/gu, (run) => '^' + [...run].map((sign) => superscripts[sign] ?? '').join(''))
			.replace(/\u2212/gu, '-')
			// the sign of the ohm that Unicode keeps beside the Greek letter
			.replace(/\u2126/gu, '\u03a9')
			.replace(/[·⋅]/gu, ' ');
		// a number in a symbol (mmH2O) is no exponent; exponents with a decimal sign want their ^
		this.tokens = plain.match(/[cm]mH[2₂]O|\^-?\d+\.\d+|\^?-?\d+|[()/*^]|[%°ºµμ℃\p{L}]+|\S/gu) ?? [];
	}

	read(): UnitFactor[] {
		if (this.tokens.length === 0) return [];
		const factors = this.product();
		if (this.at < this.tokens.length) throw this.problem(`"${this.tokens[this.at] ?? ''}" is out of place`);
		return factors;
	}

	private product(): UnitFactor[] {
		const factors = this.factor();
		while (this.at < this.tokens.length && this.tokens[this.at] !== ')') {
			if (this.tokens[this.at] === '/') {
				this.at += 1;
				factors.push(...this.factor().map((factor) => ({ ...factor, exponent: -factor.exponent })));
				const next = this.tokens[this.at];
				if (next !== undefined && next !== ')') {
					throw new QuantityProblem(
						'ambiguous-unit',
						`"${this.text}" can be read in two ways. Put what is below the line in parentheses, as in J/(mol K).`
					);
				}
				break;
			}
			if (this.tokens[this.at] === '*') this.at += 1;
			factors.push(...this.factor());
		}
		return factors;
	}

	private factor(): UnitFactor[] {
		const token = this.tokens[this.at];
		this.at += 1;
		if (token === '(') {
			const inside = this.product();
			if (this.tokens[this.at] !== ')') throw this.problem('a parenthesis is not closed');
			this.at += 1;
			return inside;
		}
		if (token === undefined) throw this.problem('something is missing at the end');
		const found = findSymbol(token);
		if (!found) throw this.problem(`"${token}" is not a unit known here`);
		const exponent = this.exponent();
		return [{ ...found, exponent }];
	}

	private exponent(): number {
		const token = this.tokens[this.at];
		if (token === undefined || !/^\^?-?\d+(?:\.\d+)?$/.test(token)) return 1;
		this.at += 1;
		return Number(token.replace('^', ''));
	}

	private problem(what: string): QuantityProblem {
		return new QuantityProblem('unknown-unit', `The unit "${this.text}" cannot be read: ${what}.`);
	}
}
