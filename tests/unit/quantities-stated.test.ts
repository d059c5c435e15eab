import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	coverageFactor,
	describeUncertainty,
	formatPlusMinus,
	formatQuantity,
	formatStated,
	parseStated,
	parseTypedNumber,
	parseUnit,
	questionAbout,
	standardOf,
	unitText,
	type KnownUncertainty,
	type StatedQuantity
} from '$lib/quantities';

const thin = '\u2009';
const minus = '\u2212';
const seed = 310;

function stated(text: string): StatedQuantity {
	const reading = parseStated(text);
	if (reading.kind !== 'quantity') throw new Error(`${text}: ${JSON.stringify(reading)}`);
	return reading.quantity;
}

describe('a quantity as it is written', () => {
	it.each<[string, number, number | null, string | null]>([
		['1.394(12)', 1.394, 0.012, null],
		['1,394(12)', 1.394, 0.012, null],
		[`${minus}5.04(3)${thin}×${thin}10³${thin}K`, -5040, 30, 'K'],
		['41.6(6) kJ/mol', 41.6, 0.6, 'kJ/mol'],
		['12.4(1.3) torr', 12.4, 1.3, 'torr'],
		['1.394(12)e-3 1/min', 0.001394, 0.000012, 'min^-1'],
		[`0.002${thin}805${thin}7(18)`, 0.0028057, 0.0000018, null],
		[`101${thin}325(12) Pa`, 101325, 12, 'Pa'],
		['22.44(2)°', 22.44, 0.02, '°'],
		['52.7(3) deg mL/(g dm)', 52.7, 0.3, 'deg mL/(g dm)'],
		['99.96(6) °C', 99.96, 0.06, '°C'],
		['41.6 ± 0.6 kJ/mol, standard uncertainty', 41.6, 0.6, 'kJ/mol'],
		['(41.6 ± 0.6) kJ/mol (standard uncertainty)', 41.6, 0.6, 'kJ/mol'],
		['41,6 +/- 0,6 kJ/mol; u', 41.6, 0.6, 'kJ/mol'],
		['41.6 kJ/mol, u = 0.6', 41.6, 0.6, 'kJ/mol'],
		['1.394 V ± 0.012 V (u)', 1.394, 0.012, 'V'],
		['25.0 °C ± 0.2 K, u', 25, 0.2, '°C'],
		['200 kJ ± 1 %, standard', 200, 2, 'kJ'],
		['(4.16 ± 0.06) × 10^1 kJ/mol (k = 2)', 41.6, 0.3, 'kJ/mol'],
		['(41.6 ± 1.2) kJ/mol, k = 2.00, ν = 16, 95 %', 41.6, 0.6, 'kJ/mol'],
		['1.394e3 ± 1.2e1, U, k = 3', 1394, 4, null],
		['1.394 ± 0,012 (expanded uncertainty, k = 2,00)', 1.394, 0.006, null],
		['41.6(6)\\times 10^{3}~\\mathrm{J\\,mol^{-1}}', 41600, 600, 'J/mol'],
		['(22.4 \\pm 0.2)~\\mathrm{{}^{\\circ}C},\\ \\text{standard uncertainty}', 22.4, 0.2, '°C'],
		['756', 756, null, null],
		['756 torr', 756, null, 'torr']
	])('%s', (text, value, u, unit) => {
		const quantity = stated(text);
		expect(quantity.value).toBeCloseTo(value, 12);
		const standard = quantity.uncertainty && standardOf(quantity.uncertainty);
		if (u === null) expect(quantity.uncertainty).toBeNull();
		else expect((standard ?? NaN) / u).toBeCloseTo(1, 12);
		expect(quantity.unit && unitText(quantity.unit)).toBe(unit);
	});

	it('asks what a plus-minus is that does not say it', () => {
		const { uncertainty } = stated('1.394 ± 0.012');
		expect(uncertainty).toEqual({ kind: 'not-stated', size: 0.012 });
		expect(uncertainty && standardOf(uncertainty)).toBeNull();
		expect(uncertainty && questionAbout(uncertainty)).toMatch(/What is the ±/);
	});

	it('asks for the k of an expanded uncertainty, unless coverage and degrees of freedom tell it', () => {
		const open = stated('1.394 ± 0.012, expanded uncertainty, 95 %').uncertainty;
		expect(open && questionAbout(open)).toMatch(/coverage factor k/);
		const told = stated('1.394 ± 0.012, ν = 9, 95 %').uncertainty;
		expect(told && standardOf(told)).toBeCloseTo(0.012 / coverageFactor(0.95, 9), 15);
	});

	it.each<[string, string, RegExp]>([
		['1394 ± 1.2 × 10^1', 'two-readings', /in parentheses before the power of ten/],
		['1.394 ± 0.9 %', 'two-readings', /both are in per cent/],
		['1.394 V ± 12 mV', 'two-readings', /different units/],
		['1.394(12), k = 2', 'two-readings', /calls the digits in parentheses expanded/],
		['1,234.5', 'two-separators', /comma and a point/],
		['12 1', 'unknown-unit', /not a unit/],
		['5 furlong', 'unknown-unit', /"furlong" is not a unit/],
		['5 × 103', 'unknown-unit', /cannot be read/],
		['5, standard uncertainty', 'not-a-number', /not its size/],
		['1.394 ± 0.012, roughly', 'unknown-unit', /cannot be read/],
		['1.394 ± 0.012, k = 0', 'not-a-number', /not a quantity/],
		['1e999(1)', 'too-large', /larger than any number/],
		['about 5', 'not-a-number', /not a quantity/]
	])('refuses %s in words', (text, code, words) => {
		const reading = parseStated(text);
		expect(reading).toMatchObject({ kind: 'problem', code });
		expect(reading.kind === 'problem' && reading.message).toMatch(words);
	});

	it('takes a kind in a cell, and still asks where none is said', () => {
		expect(parseTypedNumber('(1.394 ± 0.012) × 10^2, u')).toMatchObject({
			number: { value: 139.4, standardUncertainty: 1.2, plusMinus: null }
		});
		expect(parseTypedNumber('1.394 ± 0.012, k = 2')).toMatchObject({
			number: { standardUncertainty: 0.006 }
		});
		expect(parseTypedNumber('1.394 ± 0.012, 95 %')).toMatchObject({
			number: { standardUncertainty: null, plusMinus: 0.012 }
		});
	});
});

const expanded: KnownUncertainty = {
	kind: 'expanded',
	size: 1.38,
	coverageFactor: 2.306,
	degreesOfFreedom: 8,
	coverage: 0.95
};

describe('a quantity as it is shown', () => {
	const kilojoules = parseUnit('kJ/mol');

	it('says the kind of its uncertainty at the first use', () => {
		expect(formatStated(41.5951, expanded, kilojoules)).toEqual({
			text: `(41.6 ± 1.4)${thin}kJ/mol, expanded uncertainty, k = 2.31, ν = 8, 95 %`,
			tex: '(41.6 \\pm 1.4)~\\mathrm{kJ\\,mol^{-1}},\\ \\text{expanded uncertainty},\\ k = 2.31,\\ \\nu = 8,\\ 95~\\%',
			html: `<span class="quantity">(41.6${thin}±${thin}1.4)${thin}<span class="unit">kJ${thin}mol<sup>${minus}1</sup></span></span>, expanded uncertainty, <i>k</i> = 2.31, <i>ν</i> = 8, 95${thin}%`,
			speech:
				'41.6 plus or minus 1.4 kilojoules per mole, expanded uncertainty, coverage factor 2.31, 8 degrees of freedom, coverage 95 per cent'
		});
		const standard: KnownUncertainty = { kind: 'standard', size: 0.012 };
		expect(formatStated(1.3941, standard, parseUnit('1')).text).toBe('1.394 ± 0.012, standard uncertainty');
		expect(formatStated(1.3941, standard, parseUnit('1'), 'parentheses').text).toBe(
			'1.394(12), standard uncertainty'
		);
		// digits in parentheses are never an expanded uncertainty
		expect(formatStated(41.5951, expanded, kilojoules, 'parentheses').text).toContain('41.6 ± 1.4');
	});

	it('says nothing of an uncertainty that no digit can show', () => {
		expect(formatStated(1e7, { kind: 'standard', size: 1e-9 }, parseUnit('1')).text).toBe(
			`1${thin}×${thin}10⁷`
		);
	});

	it('tells fractional and infinite degrees of freedom', () => {
		const told = (degreesOfFreedom: number) => describeUncertainty({ ...expanded, degreesOfFreedom }).text;
		expect(told(16.81)).toContain('ν = 16.8');
		expect(told(Infinity)).toContain('ν = ∞');
	});

	it('puts a space before per cent and none before the sign of a degree', () => {
		expect(formatQuantity(1.25, 0.1, parseUnit('%')).text).toBe(`1.25(10)${thin}%`);
		expect(formatQuantity(22.441, 0.02, parseUnit('deg')).text).toBe('22.441(20)°');
		expect(formatPlusMinus(22.441, 0.03, parseUnit('deg')).text).toBe('(22.44 ± 0.03)°');
		expect(formatQuantity(22.441, 0.02, parseUnit('degC')).text).toBe(`22.441(20)${thin}°C`);
	});
});

describe('what is shown reads back', () => {
	const units = fc
		.constantFrom('1', 'K', 'degC', 'torr', 'kJ/mol', 'J/(mol K)', '1/min', 'L/(mol min)', 'deg', '%', 'mmH2O', 'µm', 'deg mL/(g dm)', 'mol^0.5/L^0.5')
		.map(parseUnit); // prettier-ignore
	const values = fc.double({ min: -1e7, max: 1e7, noNaN: true });
	const sizes = fc.double({ min: -6, max: 5, noNaN: true }).map((power) => 10 ** power);
	const kinds = fc.oneof(
		sizes.map((size): KnownUncertainty => ({ kind: 'standard', size })),
		fc
			.tuple(sizes, fc.double({ min: 1, max: 60, noNaN: true }))
			.map(([size, degreesOfFreedom]): KnownUncertainty => ({
				kind: 'expanded',
				size,
				coverageFactor: coverageFactor(0.95, degreesOfFreedom),
				degreesOfFreedom,
				coverage: 0.95
			}))
	);

	it.each(['text', 'tex'] as const)(
		'%s, with its kind, in both styles, with point and comma',
		{ timeout: 60_000 },
		(form) => {
			fc.assert(
				fc.property(
					values,
					kinds,
					units,
					fc.boolean(),
					fc.boolean(),
					(value, uncertainty, unit, comma, inside) => {
						const shown = formatStated(value, uncertainty, unit, inside ? 'parentheses' : 'plus-minus')[form];
						// commas in numbers only: exponents of units keep their point
						const back = stated(
							comma && form === 'text' ? shown.replace(/(?<!\^-?)(\d)\.(\d)/g, '$1,$2') : shown
						);
						const { size } = uncertainty;
						expect(Math.abs(back.value - value)).toBeLessThanOrEqual(0.5001 * size);
						expect(back.uncertainty?.kind).toBe(uncertainty.kind);
						expect((back.uncertainty?.size ?? NaN) / size).toBeGreaterThan(0.83);
						expect((back.uncertainty?.size ?? NaN) / size).toBeLessThan(1.17);
						expect(back.unit ?? parseUnit('1')).toEqual(unit);
						if (back.uncertainty?.kind !== 'expanded' || uncertainty.kind !== 'expanded') return;
						expect(back.uncertainty.coverageFactor).toBeCloseTo(uncertainty.coverageFactor ?? NaN, 2);
						expect(back.uncertainty.degreesOfFreedom).toBeCloseTo(uncertainty.degreesOfFreedom ?? NaN, 0);
						expect(back.uncertainty.coverage).toBe(0.95);
					}
				),
				{ numRuns: 2000, seed }
			);
		}
	);

	it('is read the same in a cell and in a text', { timeout: 60_000 }, () => {
		fc.assert(
			fc.property(values, sizes, (value, u) => {
				const { text } = formatQuantity(value, u, parseUnit('1'));
				const cell = parseTypedNumber(text);
				expect(cell.kind === 'number' && cell.number.value).toBe(stated(text).value);
				expect(cell.kind === 'number' && cell.number.standardUncertainty).toBe(
					stated(text).uncertainty?.size
				);
			}),
			{ numRuns: 1000, seed }
		);
	});

	it('a plain decimal is read as it stands, by the short way and the long', { timeout: 60_000 }, () => {
		const decimals = fc.tuple(fc.integer({ min: -99999, max: 99999 }), fc.integer({ min: 0, max: 9 }));
		fc.assert(
			fc.property(decimals, ([digits, places]) => {
				const text = (digits / 1000).toFixed(places);
				expect(parseTypedNumber(text)).toEqual(parseTypedNumber(` ${text}`));
				expect(parseTypedNumber(text)).toMatchObject({ number: { value: Number(text), decimals: places } });
			}),
			{ numRuns: 1000, seed }
		);
	});

	it(
		'never throws and never gives anything but finite numbers, whatever is typed',
		{ timeout: 60_000 },
		() => {
			const signs = fc.constantFrom(
				...'0123456789.,-+eEkuUν()±×^ xo/°%=;\\~{}\u2212\u2009',
				' kJ/mol',
				'k = 2',
				' ± ',
				'\\pm'
			);
			fc.assert(
				fc.property(fc.string({ unit: signs, maxLength: 24 }), (text) => {
					const reading = parseStated(text);
					if (reading.kind === 'quantity') {
						expect(Number.isFinite(reading.quantity.value)).toBe(true);
						expect(Number.isFinite(reading.quantity.uncertainty?.size ?? 0)).toBe(true);
					}
				}),
				{ numRuns: 10_000, seed }
			);
		}
	);
});
