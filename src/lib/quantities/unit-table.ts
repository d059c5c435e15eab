import { dimensionless, type Dimension } from './dimension';
import { pi } from './elementary';

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
	/** a sign close to its number, as in 22.4°; among other units it is written by its symbol, with a space */
	sign?: true;
	/** plain text where it differs from the symbol */
	text?: string;
	/** what a screen reader says: one, several */
	speech: readonly [string, string];
}

export const prefixFactors: Readonly<Record<string, readonly [number, string]>> = {
	p: [1e-12, 'pico'],
	n: [1e-9, 'nano'],
	u: [1e-6, 'micro'],
	m: [1e-3, 'milli'],
	c: [1e-2, 'centi'],
	d: [1e-1, 'deci'],
	h: [1e2, 'hecto'],
	k: [1e3, 'kilo'],
	M: [1e6, 'mega'],
	G: [1e9, 'giga']
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
 * torr = atm/760; mmHg and mmH2O conventional, 13 595.1 and 1000 kg/m3 at 9.80665 m/s2; thermochemical calorie; inch,
 * pound 0.453 592 37 kg; elementary charge 1.602 176 634e-19 C). An angle is a number, so a degree is pi/180 of one.
 */
export const unitTable: Readonly<Record<string, UnitEntry>> = {
	'1': { factor: 1, dimension: dimensionless, speech: ['', ''] },
	'%': { factor: 1e-2, dimension: dimensionless, tex: '\\%', speech: ['per cent', 'per cent'] },
	ppm: { factor: 1e-6, dimension: dimensionless, speech: ['part per million', 'parts per million'] },
	rad: { factor: 1, dimension: dimensionless, prefixes: 'um', speech: ['radian', 'radians'] },
	deg: {
		factor: pi / 180,
		dimension: dimensionless,
		text: '°',
		tex: '{}^{\\circ}',
		sign: true,
		speech: ['degree', 'degrees']
	},
	m: { factor: 1, dimension: length, prefixes: 'pnumcdk', speech: ['metre', 'metres'] },
	g: { factor: 1e-3, dimension: mass, prefixes: 'numk', speech: ['gram', 'grams'] },
	s: { factor: 1, dimension: time, prefixes: 'pnum', speech: ['second', 'seconds'] },
	min: { factor: 60, dimension: time, speech: ['minute', 'minutes'] },
	h: { factor: 3600, dimension: time, speech: ['hour', 'hours'] },
	Hz: { factor: 1, dimension: [0, 0, -1, 0, 0, 0, 0], prefixes: 'kMG', speech: ['hertz', 'hertz'] },
	A: { factor: 1, dimension: [0, 0, 0, 1, 0, 0, 0], prefixes: 'pnum', speech: ['ampere', 'amperes'] },
	C: { factor: 1, dimension: [0, 0, 1, 1, 0, 0, 0], prefixes: 'pnum', speech: ['coulomb', 'coulombs'] },
	V: { factor: 1, dimension: [2, 1, -3, -1, 0, 0, 0], prefixes: 'numk', speech: ['volt', 'volts'] },
	ohm: {
		factor: 1,
		dimension: [2, 1, -3, -2, 0, 0, 0],
		prefixes: 'mkMG',
		text: 'Ω',
		tex: '\\Omega',
		speech: ['ohm', 'ohms']
	},
	S: { factor: 1, dimension: [-2, -1, 3, 2, 0, 0, 0], prefixes: 'um', speech: ['siemens', 'siemens'] },
	K: { factor: 1, dimension: temperature, prefixes: 'mk', speech: ['kelvin', 'kelvins'] },
	degC: {
		factor: 1,
		offset: 273.15,
		dimension: temperature,
		text: '°C',
		tex: '{}^{\\circ}C',
		speech: ['degree Celsius', 'degrees Celsius']
	},
	mol: { factor: 1, dimension: [0, 0, 0, 0, 0, 1, 0], prefixes: 'numk', speech: ['mole', 'moles'] },
	L: { factor: 1e-3, dimension: [3, 0, 0, 0, 0, 0, 0], prefixes: 'numdh', speech: ['litre', 'litres'] },
	M: { factor: 1e3, dimension: [-3, 0, 0, 0, 0, 1, 0], prefixes: 'num', speech: ['molar', 'molar'] },
	N: { factor: 1, dimension: [1, 1, -2, 0, 0, 0, 0], prefixes: 'mk', speech: ['newton', 'newtons'] },
	J: { factor: 1, dimension: energy, prefixes: 'umkM', speech: ['joule', 'joules'] },
	cal: { factor: 4.184, dimension: energy, prefixes: 'k', speech: ['calorie', 'calories'] },
	eV: {
		factor: 1.602176634e-19,
		dimension: energy,
		prefixes: 'mk',
		speech: ['electronvolt', 'electronvolts']
	},
	W: { factor: 1, dimension: [2, 1, -3, 0, 0, 0, 0], prefixes: 'umk', speech: ['watt', 'watts'] },
	Pa: { factor: 1, dimension: pressure, prefixes: 'mhkMG', speech: ['pascal', 'pascals'] },
	bar: { factor: 1e5, dimension: pressure, prefixes: 'mk', speech: ['bar', 'bars'] },
	atm: { factor: 101325, dimension: pressure, speech: ['atmosphere', 'atmospheres'] },
	torr: { factor: 101325 / 760, dimension: pressure, prefixes: 'm', speech: ['torr', 'torr'] },
	mmHg: {
		factor: 133.322387415,
		dimension: pressure,
		speech: ['millimetre of mercury', 'millimetres of mercury']
	},
	inHg: { factor: 3386.388640341, dimension: pressure, speech: ['inch of mercury', 'inches of mercury'] },
	mmH2O: {
		factor: 9.80665,
		dimension: pressure,
		tex: 'mmH_2O',
		html: 'mmH<sub>2</sub>O',
		speech: ['millimetre of water', 'millimetres of water']
	},
	cmH2O: {
		factor: 98.0665,
		dimension: pressure,
		tex: 'cmH_2O',
		html: 'cmH<sub>2</sub>O',
		speech: ['centimetre of water', 'centimetres of water']
	},
	psi: {
		factor: (0.45359237 * 9.80665) / (0.0254 * 0.0254),
		dimension: pressure,
		speech: ['pound per square inch', 'pounds per square inch']
	}
};

/** Other ways in which the symbols are typed. */
export const unitAliases: Readonly<Record<string, string>> = {
	'°C': 'degC',
	ºC: 'degC',
	'℃': 'degC',
	'°c': 'degC',
	degc: 'degC',
	'°': 'deg',
	º: 'deg',
	Torr: 'torr',
	mTorr: 'mtorr',
	'mmH₂O': 'mmH2O',
	'cmH₂O': 'cmH2O',
	Ω: 'ohm',
	kΩ: 'kohm',
	l: 'L',
	ml: 'mL',
	KPa: 'kPa',
	sec: 's',
	hr: 'h'
};
