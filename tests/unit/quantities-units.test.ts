import { unit as mathjsUnit } from 'mathjs';
import { describe, expect, it } from 'vitest';
import {
	coherentUnit,
	divideUnits,
	exactly,
	parseUnit,
	plainNumber,
	power,
	QuantityProblem,
	unitHtml,
	unitOne,
	unitSpeech,
	unitTex,
	unitText
} from '$lib/quantities';

/** Our symbol -> mathjs' name for the same unit. Its table is the independent source here. */
const inMathjs: Record<string, string> = {
	m: 'm',
	mm: 'mm',
	cm: 'cm',
	nm: 'nm',
	g: 'g',
	kg: 'kg',
	mg: 'mg',
	s: 's',
	ms: 'ms',
	min: 'minute',
	h: 'hour',
	K: 'K',
	mol: 'mol',
	mmol: 'mmol',
	L: 'L',
	mL: 'mL',
	N: 'N',
	J: 'J',
	kJ: 'kJ',
	W: 'W',
	V: 'V',
	mA: 'mA',
	Pa: 'Pa',
	hPa: 'hPa',
	kPa: 'kPa',
	bar: 'bar',
	mbar: 'mbar',
	atm: 'atm',
	'kJ/mol': 'kJ/mol',
	'J/(mol K)': 'J/(mol K)',
	'1/K': 'K^-1',
	'kg/m3': 'kg/m^3',
	'mol/L': 'mol/L',
	M: 'mol/L',
	mM: 'mmol/L',
	deg: 'deg',
	rad: 'rad',
	dm: 'dm',
	pm: 'pm',
	A: 'A',
	mV: 'mV',
	C: 'C',
	ohm: 'ohm',
	kohm: 'kohm',
	mS: 'mS',
	'S/cm': 'S/cm',
	kHz: 'kHz',
	mmH2O: 'mmH2O',
	cmH2O: 'cmH2O',
	'1/min': 'minute^-1',
	'L/(mol min)': 'L/(mol minute)',
	'deg mL/(g dm)': 'deg mL/(g dm)',
	'J/K': 'J/K',
	'J/g': 'J/g',
	'J/cm': 'J/cm',
	'K/min': 'K/minute'
};

describe('units', () => {
	it.each(Object.entries(inMathjs))('%s has the factor that mathjs gives', (ours, theirs) => {
		const unit = parseUnit(ours);
		const si = mathjsUnit(1, theirs).toSI();
		// the coherent unit of mathjs has the kilogram as its base, as ours
		expect(unit.factor / Number(si.toNumber(si.formatUnits()))).toBeCloseTo(1, 14);
	});

	it.each([
		// Debian's `units` 2.22 (definitions.units): thermochemical calorie; inch of mercury; pound force a square inch
		['cal', 4.184, 'J'],
		['kcal', 4184, 'J'],
		['inHg', 3386.3886, 'Pa'],
		['psi', 6894.7573, 'Pa'],
		['mmHg', 133.32239, 'Pa'],
		['torr', 133.32237, 'Pa'],
		['%', 0.01, '1'],
		['ppm', 1e-6, '1'],
		// SI brochure, 9th edition: exact
		['eV', 1.602176634e-19, 'J']
	])('1 %s is %d %s', (unit, factor, coherent) => {
		expect(parseUnit(unit).factor / factor).toBeCloseTo(1, 7);
		expect(parseUnit(unit).dimension).toEqual(parseUnit(coherent).dimension);
	});

	/** What the laboratory writes; each reads, tells itself in four forms and reads back. */
	it.each([
		['K', 'K', '\\mathrm{K}', 'K', 'kelvins'],
		['degC', '°C', '\\mathrm{{}^{\\circ}C}', '°C', 'degrees Celsius'],
		['torr', 'torr', '\\mathrm{torr}', 'torr', 'torr'],
		['Torr', 'torr', '\\mathrm{torr}', 'torr', 'torr'],
		['mmHg', 'mmHg', '\\mathrm{mmHg}', 'mmHg', 'millimetres of mercury'],
		['mmH2O', 'mmH2O', '\\mathrm{mmH_2O}', 'mmH<sub>2</sub>O', 'millimetres of water'],
		['mmH₂O', 'mmH2O', '\\mathrm{mmH_2O}', 'mmH<sub>2</sub>O', 'millimetres of water'],
		['cal', 'cal', '\\mathrm{cal}', 'cal', 'calories'],
		['kJ/mol', 'kJ/mol', '\\mathrm{kJ\\,mol^{-1}}', 'kJ\u2009mol<sup>\u22121</sup>', 'kilojoules per mole'],
		['M', 'M', '\\mathrm{M}', 'M', 'molar'],
		['1/min', 'min^-1', '\\mathrm{min^{-1}}', 'min<sup>\u22121</sup>', 'per minute'],
		[
			'L/(mol min)',
			'L/(mol min)',
			'\\mathrm{L\\,mol^{-1}\\,min^{-1}}',
			'L\u2009mol<sup>\u22121</sup>\u2009min<sup>\u22121</sup>',
			'litres per mole minute'
		],
		['deg', '°', '\\mathrm{{}^{\\circ}}', '°', 'degrees'],
		[
			'deg mL/(g dm)',
			'deg mL/(g dm)',
			'\\mathrm{deg\\,mL\\,g^{-1}\\,dm^{-1}}',
			'deg\u2009mL\u2009g<sup>\u22121</sup>\u2009dm<sup>\u22121</sup>',
			'degree millilitres per gram decimetre'
		],
		['%', '%', '\\mathrm{\\%}', '%', 'per cent'],
		['nm', 'nm', '\\mathrm{nm}', 'nm', 'nanometres'],
		['kg/m3', 'kg/m^3', '\\mathrm{kg\\,m^{-3}}', 'kg\u2009m<sup>\u22123</sup>', 'kilograms per cubic metre'],
		[
			'µmol/L',
			'µmol/L',
			'\\mathrm{\\text{µ}mol\\,L^{-1}}',
			'µmol\u2009L<sup>\u22121</sup>',
			'micromoles per litre'
		],
		['kΩ', 'kΩ', '\\mathrm{k\\Omega}', 'kΩ', 'kiloohms']
	])('%s', (typed, text, tex, html, speech) => {
		const unit = parseUnit(typed);
		expect([unitText(unit), unitTex(unit), unitHtml(unit), unitSpeech(unit)]).toEqual([
			text,
			tex,
			html,
			speech
		]);
		expect(parseUnit(text)).toEqual(unit);
	});

	it('reads what is typed for degrees', () => {
		for (const text of ['deg C', '° C', '°C', 'degC']) expect(parseUnit(text)).toEqual(parseUnit('degC'));
		expect(parseUnit('°')).toEqual(parseUnit('deg'));
		expect(parseUnit('° mL/(g dm)')).toEqual(parseUnit('deg mL/(g dm)'));
		expect(parseUnit('\u2126')).toEqual(parseUnit('ohm'));
	});

	it('takes torr and millimetres of mercury apart', () => {
		expect(parseUnit('torr').factor).toBe(101325 / 760);
		expect(mathjsUnit(1, 'torr').toNumber('Pa') / parseUnit('torr').factor).toBeCloseTo(1, 5);
		// conventional millimetre of mercury, BIPM SI brochure 8th edition table 8
		expect(parseUnit('mmHg').factor).toBe(133.322387415);
		expect(parseUnit('mmHg').factor / parseUnit('torr').factor - 1).toBeCloseTo(1.4e-7, 8);
	});

	it('knows points of the Celsius scale', () => {
		expect(parseUnit('degC').offset).toBe(mathjsUnit(0, 'degC').toNumber('K'));
		expect(parseUnit('°C')).toEqual(parseUnit('degC'));
		expect(divideUnits(parseUnit('J'), parseUnit('degC'))).toEqual(parseUnit('J/K'));
	});

	it.each(['J mol-1 K-1', 'J mol^-1 K^-1', 'J mol⁻¹ K⁻¹', 'J/(K mol)', 'J·mol⁻¹·K⁻¹'])(
		'reads %s as J/(mol K)',
		(text) => {
			const unit = parseUnit(text);
			expect(unit.dimension).toEqual(parseUnit('J/(mol K)').dimension);
			expect(unit.factor).toBe(1);
		}
	);

	it('refuses what can be read in two ways, and what it does not know', () => {
		expect(() => parseUnit('J/mol K')).toThrow(/two ways/);
		expect(() => parseUnit('furlong')).toThrow(QuantityProblem);
		expect(() => parseUnit('kJ/')).toThrow(/missing at the end/);
		expect(() => parseUnit('J/(mol K')).toThrow(/not closed/);
	});

	it('writes units in every form, and its own text reads back', () => {
		const unit = parseUnit('kJ/mol');
		expect([unitText(unit), unitTex(unit), unitHtml(unit), unitSpeech(unit)]).toEqual([
			'kJ/mol',
			'\\mathrm{kJ\\,mol^{-1}}',
			'kJ\u2009mol<sup>\u22121</sup>',
			'kilojoules per mole'
		]);
		expect(unitText(parseUnit('1/K'))).toBe('K^-1');
		expect(unitText(unitOne)).toBe('1');
		expect(unitSpeech(parseUnit('m3'))).toBe('cubic metres');
		for (const text of ['kJ/mol', 'J/(mol K)', '1/K', 'm3', 'degC', '%', 'mol/(L min)', 'µm']) {
			expect(parseUnit(unitText(parseUnit(text)))).toEqual(parseUnit(text));
		}
	});

	it('takes powers of any size in no time, and refuses those beyond all numbers', () => {
		expect(parseUnit('m^99999999').factor).toBe(1);
		expect(() => parseUnit('km^99999999')).toThrow(/beyond all numbers/);
		expect(() => power(exactly(2, parseUnit('cm')), plainNumber(1e9))).toThrow(QuantityProblem);
		expect(parseUnit('m⁻⁵ s⁶')).toEqual(parseUnit('m^-5 s^6'));
		expect(parseUnit('cm^20').factor / 1e-40).toBeCloseTo(1, 13);
	});

	it('finds a coherent unit for any dimension', () => {
		expect(unitText(coherentUnit(parseUnit('kPa').dimension))).toBe('Pa');
		expect(coherentUnit(parseUnit('g/L').dimension).factor).toBe(1);
	});
});
