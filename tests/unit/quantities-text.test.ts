import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { formatPlusMinus, formatQuantity, parseTypedNumber, parseUnit, unitOne } from '$lib/quantities';

const thin = '\u2009';
const minus = '\u2212';

function number(text: string) {
	const reading = parseTypedNumber(text);
	if (reading.kind !== 'number') throw new Error(`${text}: ${JSON.stringify(reading)}`);
	return reading.number;
}

describe('typed numbers', () => {
	it.each([
		['25.30', 25.3, 2],
		['75,6', 75.6, 1],
		[`${minus}3.5`, -3.5, 1],
		['  401.2 ', 401.2, 1],
		['.5', 0.5, 1],
		['5.', 5, 0],
		['1.2e-3', 0.0012, 1],
		['1.2×10⁻³', 0.0012, 1],
		['1.2 * 10^-3', 0.0012, 1],
		[`101${thin}325`, 101325, 0],
		['101 325,5', 101325.5, 1],
		['+7', 7, 0]
	])('reads %s', (text, value, decimals) => {
		expect(number(text)).toMatchObject({ value, decimals, standardUncertainty: null, doubt: null });
	});

	it('reads digits in parentheses as a standard uncertainty in the last place', () => {
		expect(number('1.394(12)')).toMatchObject({ value: 1.394, standardUncertainty: 0.012 });
		expect(number('41,6(6)').standardUncertainty).toBe(0.6);
		expect(number('12.4(1.3)').standardUncertainty).toBe(1.3);
		expect(number('5.04(3)e3').standardUncertainty).toBe(30);
	});

	it('does not decide what a plus-minus is', () => {
		expect(number('1.394 ± 0.012')).toMatchObject({
			value: 1.394,
			standardUncertainty: null,
			plusMinus: 0.012
		});
		expect(number('1.394 +/- 0.012').plusMinus).toBe(0.012);
	});

	it('asks about a comma before three digits', () => {
		expect(number('1,234')).toMatchObject({ value: 1.234, doubt: 'comma-before-three-digits' });
		expect(number('0,234').doubt).toBeNull();
	});

	it.each([
		['75,6o', 'not-a-number', '"75,6o" is not a number.'],
		['--3', 'not-a-number', '"--3" is not a number.'],
		['1.2.3', 'not-a-number', '"1.2.3" is not a number.'],
		['NaN', 'not-a-number', '"NaN" is not a number.'],
		['Infinity', 'not-a-number', '"Infinity" is not a number.'],
		['0x10', 'not-a-number', '"0x10" is not a number.'],
		['1,234.5', 'two-separators', 'comma and a point'],
		['756 torr', 'has-unit', 'carries "torr"'],
		['1e999', 'too-large', 'larger than any number']
	])('says what is wrong with %s', (text, code, words) => {
		const reading = parseTypedNumber(text);
		expect(reading).toMatchObject({ kind: 'problem', code });
		expect(reading.kind === 'problem' && reading.message).toContain(words);
	});

	it('takes an empty cell as empty', () => {
		expect(parseTypedNumber(' \u00a0 ')).toEqual({ kind: 'empty' });
	});

	it('never throws, and gives finite numbers only', { timeout: 30_000 }, () => {
		const signs = fc.constantFrom(...'0123456789.,-+eE()±×^ xo/°C\u2212\u2009');
		fc.assert(
			fc.property(fc.string({ unit: signs, maxLength: 12 }), (text) => {
				const reading = parseTypedNumber(text);
				if (reading.kind === 'number') expect(Number.isFinite(reading.number.value)).toBe(true);
			}),
			{ numRuns: 5000, seed: 310 }
		);
	});
});

describe('quantities for reading', () => {
	const kilojoules = parseUnit('kJ/mol');

	it('rounds to the uncertainty and gives all four forms', () => {
		expect(formatQuantity(41.5951, 0.6, kilojoules)).toEqual({
			text: `41.6(6)${thin}kJ/mol`,
			tex: '41.6(6)~\\mathrm{kJ\\,mol^{-1}}',
			html: `<span class="quantity">41.6(6)${thin}<span class="unit">kJ${thin}mol<sup>${minus}1</sup></span></span>`,
			speech: '41.6 with standard uncertainty 0.6 kilojoules per mole'
		});
	});

	it.each([
		[41.5951, 0.247, '41.60(25)'],
		[41.5951, 0.296, '41.6(3)'],
		[41.5951, 0.0996, '41.60(10)'],
		[41.5951, 0.35, '41.6(3)'],
		[12.4, 1.26, '12.4(1.3)'],
		[373.3934, 0.208, '373.39(21)'],
		[-5040.53, 29.5, `${minus}5.04(3)${thin}×${thin}10³`],
		[-5040.53, 2.5, `${minus}5040.5(2.5)`],
		[0.00012345, 0.0000012, `1.234(12)${thin}×${thin}10⁻⁴`],
		[0.0028057, 0.0000018, '0.0028057(18)'],
		[-0.01, 0.6, '0.0(6)'],
		[0.2, 25, `0(25)`],
		[3, 400, `0(4)${thin}×${thin}10²`],
		[101325, null, '101325'],
		[1e-9, null, `1${thin}×${thin}10⁻⁹`],
		[0, null, '0']
	])('tells %d with u = %d as %s', (value, u, text) => {
		expect(formatQuantity(value, u, unitOne).text).toBe(text);
	});

	it('tells an expanded uncertainty with its unit around both', () => {
		expect(formatPlusMinus(41.5951, 0.57, kilojoules).text).toBe(`(41.6 ± 0.6)${thin}kJ/mol`);
		expect(formatPlusMinus(1.3984, 0.012, unitOne).text).toBe('1.398 ± 0.012');
	});

	it('gives back value and uncertainty to the digits shown', { timeout: 30_000 }, () => {
		const values = fc.double({ min: -1e5, max: 1e5, noNaN: true });
		const sizes = fc.double({ min: 1e-6, max: 1e3, noNaN: true });
		fc.assert(
			fc.property(values, sizes, (value, u) => {
				const back = number(formatQuantity(value, u, unitOne).text.replaceAll(thin, ''));
				expect(Math.abs(back.value - value)).toBeLessThanOrEqual(0.5001 * u);
				const ratio = (back.standardUncertainty ?? NaN) / u;
				expect(ratio).toBeGreaterThan(0.83);
				expect(ratio).toBeLessThan(1.17);
			}),
			{ numRuns: 2000, seed: 310 }
		);
	});
});
