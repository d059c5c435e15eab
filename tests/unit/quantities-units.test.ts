import { unit as mathjsUnit } from 'mathjs';
import { describe, expect, it } from 'vitest';
import {
	coherentUnit,
	divideUnits,
	parseUnit,
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
	'mol/L': 'mol/L'
};

describe('units', () => {
	it.each(Object.entries(inMathjs))('%s has the factor that mathjs gives', (ours, theirs) => {
		const unit = parseUnit(ours);
		const si = mathjsUnit(1, theirs).toSI();
		// the coherent unit of mathjs has the kilogram as its base, as ours
		expect(unit.factor / Number(si.toNumber(si.formatUnits()))).toBeCloseTo(1, 14);
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

	it('finds a coherent unit for any dimension', () => {
		expect(unitText(coherentUnit(parseUnit('kPa').dimension))).toBe('Pa');
		expect(coherentUnit(parseUnit('g/L').dimension).factor).toBe(1);
	});
});
