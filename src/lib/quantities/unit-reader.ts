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

const superscripts: Readonly<Record<string, string>> = {
	'⁻': '-',
	'¹': '1',
	'²': '2',
	'³': '3',
	'⁴': '4',
	'⁵': '5',
	'⁶': '6',
	'⁷': '7',
	'⁸': '8',
	'⁹': '9',
	'⁰': '0'
};

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

/** Takes a text apart into factors, without knowing what they make together. */
export class UnitReader {
	private readonly tokens: string[];
	private at = 0;

	constructor(private readonly text: string) {
		const plain = text
			// degrees Celsius with a space inside; an angle times a coulomb is nobody's unit
			.replace(/(?:°|º|deg)\s+[cC](?![\p{L}\d])/gu, 'degC')
			.replace(/[⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+/gu, (run) => '^' + [...run].map((sign) => superscripts[sign] ?? '').join(''))
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
