import { dimensionless, type Dimension } from './dimension';

/** One unit by its symbol. `factor` converts to the coherent SI unit: SI value = value * factor + offset. */
export interface UnitEntry {
	factor: number;
	dimension: Dimension;
	/** kelvins between the zero of the scale and absolute zero; only for scales of temperature */
	offset?: number;
	/** SI prefixes it is used with, in the order of `prefixFactors` */
	prefixes?: string;
	tex?: string;
	html?: string;
	/** plain text where it differs from the symbol */
	text?: string;
	/** what a screen reader says: one, several */
	speech: readonly [string, string];
}

export const prefixFactors: Readonly<Record<string, readonly [number, string]>> = {
	n: [1e-9, 'nano'],
	u: [1e-6, 'micro'],
	m: [1e-3, 'milli'],
	c: [1e-2, 'centi'],
	d: [1e-1, 'deci'],
	h: [1e2, 'hecto'],
	k: [1e3, 'kilo'],
	M: [1e6, 'mega']
};

const length: Dimension = [1, 0, 0, 0, 0, 0, 0];
const mass: Dimension = [0, 1, 0, 0, 0, 0, 0];
const time: Dimension = [0, 0, 1, 0, 0, 0, 0];
const temperature: Dimension = [0, 0, 0, 0, 1, 0, 0];
const pressure: Dimension = [-1, 1, -2, 0, 0, 0, 0];
const energy: Dimension = [2, 1, -2, 0, 0, 0, 0];

/**
 * The units of a physical-chemistry laboratory. Small on purpose: a general unit library weighs more than
 * everything else that a page loads for its numbers. Factors are exact by definition (SI brochure, 9th edition;
 * torr = atm/760; mmHg conventional, 13 595.1 kg/m3 at 9.80665 m/s2; thermochemical calorie) except where noted.
 */
export const unitTable: Readonly<Record<string, UnitEntry>> = {
	'1': { factor: 1, dimension: dimensionless, speech: ['', ''] },
	'%': { factor: 1e-2, dimension: dimensionless, tex: '\\%', speech: ['per cent', 'per cent'] },
	m: { factor: 1, dimension: length, prefixes: 'numcdk', speech: ['metre', 'metres'] },
	g: { factor: 1e-3, dimension: mass, prefixes: 'umk', speech: ['gram', 'grams'] },
	s: { factor: 1, dimension: time, prefixes: 'num', speech: ['second', 'seconds'] },
	min: { factor: 60, dimension: time, speech: ['minute', 'minutes'] },
	h: { factor: 3600, dimension: time, speech: ['hour', 'hours'] },
	A: { factor: 1, dimension: [0, 0, 0, 1, 0, 0, 0], prefixes: 'um', speech: ['ampere', 'amperes'] },
	V: { factor: 1, dimension: [2, 1, -3, -1, 0, 0, 0], prefixes: 'umk', speech: ['volt', 'volts'] },
	K: { factor: 1, dimension: temperature, prefixes: 'mk', speech: ['kelvin', 'kelvins'] },
	degC: {
		factor: 1,
		offset: 273.15,
		dimension: temperature,
		text: '°C',
		tex: '{}^{\\circ}C',
		html: '°C',
		speech: ['degree Celsius', 'degrees Celsius']
	},
	mol: { factor: 1, dimension: [0, 0, 0, 0, 0, 1, 0], prefixes: 'umk', speech: ['mole', 'moles'] },
	L: { factor: 1e-3, dimension: [3, 0, 0, 0, 0, 0, 0], prefixes: 'umd', speech: ['litre', 'litres'] },
	N: { factor: 1, dimension: [1, 1, -2, 0, 0, 0, 0], prefixes: 'mk', speech: ['newton', 'newtons'] },
	J: { factor: 1, dimension: energy, prefixes: 'mkM', speech: ['joule', 'joules'] },
	cal: { factor: 4.184, dimension: energy, prefixes: 'k', speech: ['calorie', 'calories'] },
	W: { factor: 1, dimension: [2, 1, -3, 0, 0, 0, 0], prefixes: 'mk', speech: ['watt', 'watts'] },
	Pa: { factor: 1, dimension: pressure, prefixes: 'mhkM', speech: ['pascal', 'pascals'] },
	bar: { factor: 1e5, dimension: pressure, prefixes: 'm', speech: ['bar', 'bars'] },
	atm: { factor: 101325, dimension: pressure, speech: ['atmosphere', 'atmospheres'] },
	torr: {
		factor: 101325 / 760,
		dimension: pressure,
		text: 'Torr',
		tex: 'Torr',
		html: 'Torr',
		speech: ['torr', 'torr']
	},
	mmHg: {
		factor: 133.322387415,
		dimension: pressure,
		speech: ['millimetre of mercury', 'millimetres of mercury']
	}
};

/** Other ways in which the symbols are typed. */
export const unitAliases: Readonly<Record<string, string>> = {
	'°C': 'degC',
	ºC: 'degC',
	'℃': 'degC',
	'°c': 'degC',
	degc: 'degC',
	Torr: 'torr',
	l: 'L',
	ml: 'mL',
	KPa: 'kPa',
	sec: 's',
	hr: 'h'
};
