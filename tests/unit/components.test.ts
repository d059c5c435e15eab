import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { courseTime } from '../../src/lib/components/shared/course-time';
import { fractionWidth, splitDecimal } from '../../src/lib/components/shared/decimal';
import { pointOnGlass, sectionAt, segmentShare, tickPlaces } from '../../src/lib/components/shared/scale';
import { intervalPlaces } from '../../src/lib/components/figures/interval-places';
import { contributionText, percentText } from '../../src/lib/components/figures/numbers';
import { axisRuns, runsText, symbolRuns, unitRuns } from '../../src/lib/components/figures/symbol-runs';

describe('columns aligned on the decimal marker', () => {
	it.each([
		['355.25(4)', '355', '.25(4)'],
		['\u221212,5', '\u221212', ',5'],
		['.5', '', '.5'],
		['1000', '1000', ''],
		['75,6o', '75', ',6o'],
		['no reading', 'no reading', ''],
		['Trial 1.5', 'Trial 1.5', '']
	])('cuts %s', (text, whole, fraction) => expect(splitDecimal(text)).toEqual({ whole, fraction }));

	it('loses no character', () => {
		fc.assert(
			fc.property(fc.string({ unit: fc.constantFrom(...'0123456789.,-()e ') }), (text) => {
				const { whole, fraction } = splitDecimal(text);
				expect(whole + fraction).toBe(text);
			})
		);
	});

	it('is as wide as the widest fraction', () => {
		expect(fractionWidth(['1', '2.5', '3.25(4)'])).toBe(6);
		expect(fractionWidth([])).toBe(0);
	});
});

describe('the glass', () => {
	const sheet = [
		{ top: 100, bottom: 300 },
		{ top: 300, bottom: 1100 }
	];
	const glass = [
		{ top: 0, bottom: 40 },
		{ top: 40, bottom: 120 }
	];

	it('shows a place of the sheet in proportion within its section', () => {
		expect(pointOnGlass(0, sheet, glass)).toBe(0);
		expect(pointOnGlass(200, sheet, glass)).toBe(20);
		expect(pointOnGlass(700, sheet, glass)).toBe(80);
		expect(pointOnGlass(5000, sheet, glass)).toBe(120);
	});

	it('never falls while one reads on', () => {
		const gaps = fc.array(fc.integer({ min: 1, max: 900 }), { minLength: 1, maxLength: 8 });
		fc.assert(
			fc.property(
				gaps,
				fc.integer({ min: -200, max: 9000 }),
				fc.integer({ min: 0, max: 500 }),
				(lengths, y, step) => {
					let top = 0;
					let onGlass = 0;
					const sections = lengths.map((length) => ({ top, bottom: (top += length) }));
					const segments = lengths.map((length) => {
						const from = onGlass;
						onGlass += Math.max(28, segmentShare(length));
						return { top: from, bottom: onGlass };
					});
					expect(pointOnGlass(y + step, sections, segments)).toBeGreaterThanOrEqual(
						pointOnGlass(y, sections, segments)
					);
				}
			)
		);
	});

	it('names the section that begins at or above the reading line', () => {
		expect(sectionAt(0, sheet)).toBe(0);
		expect(sectionAt(299, sheet)).toBe(0);
		expect(sectionAt(300, sheet)).toBe(1);
	});

	it('gives length its square root, and ticks without a place an even spread', () => {
		expect(segmentShare(400)).toBe(20);
		expect(segmentShare(0)).toBe(1);
		const tick = { href: '#a', label: 'a', state: 'open' } as const;
		expect(tickPlaces([tick, tick, { ...tick, at: 1 }])).toEqual([0.25, 0.5, 0.97]);
	});
});

describe('the course’s clock', () => {
	const due = new Date('2026-12-04T22:00:00Z');

	it('is told in the course’s zone, whatever the device’s', () => {
		expect(courseTime(due, 'America/New_York', 'day')).toBe('Friday 17:00');
		expect(courseTime(due, 'Asia/Tokyo', 'full')).toBe('Saturday 5 December 2026, 07:00');
	});

	it('is as short as cannot be mistaken', () => {
		const zone = 'America/New_York';
		expect(courseTime(due, zone, undefined, new Date('2026-12-04T15:00:00Z'))).toBe('17:00');
		expect(courseTime(due, zone, undefined, new Date('2026-12-01T15:00:00Z'))).toBe('Friday 17:00');
		expect(courseTime(due, zone, undefined, new Date('2026-11-20T15:00:00Z'))).toBe('Fri 4 Dec, 17:00');
		expect(courseTime(due, zone, undefined, new Date('2026-03-20T15:00:00Z'))).toBe(
			'Friday 4 December 2026, 17:00'
		);
		expect(courseTime(due, zone)).toBe('Friday 4 December 2026, 17:00');
	});

	it('writes midnight as 00:00', () => {
		expect(courseTime(new Date('2026-12-04T05:00:00Z'), 'America/New_York', 'clock')).toBe('00:00');
	});
});

describe('symbols without a formula engine', () => {
	it('sets quantities italic and descriptive indices upright', () => {
		expect(symbolRuns('\\Delta_{\\mathrm{vap}}H')).toEqual([
			{ text: 'Δ', italic: false, shift: null },
			{ text: 'vap', italic: false, shift: 'sub' },
			{ text: 'H', italic: true, shift: null }
		]);
	});

	it.each([
		['T^{-1}', 'T^\u22121'],
		['\\ln(p/\\mathrm{Pa})', 'ln(p/Pa)'],
		['\\ln p', 'ln\u2009p'],
		['\\gamma(\\mathrm{Ar})', 'γ(Ar)'],
		['\\overline{T}', 'T'],
		['p_{\\mathrm{b}}', 'p_b'],
		['\\text{bath note}', 'bath note'],
		['\\frac{a}{b}', 'a/b'],
		['\\unheardof', 'unheardof']
	])('reads %s', (tex, text) => expect(runsText(symbolRuns(tex))).toBe(text));

	it('ends on any input', () => {
		fc.assert(
			fc.property(fc.string({ unit: fc.constantFrom(...'\\{}^_ab T~-/') }), (tex) => {
				expect(symbolRuns(tex).every(({ text }) => text.length > 0)).toBe(true);
			})
		);
	});

	it('puts units under the quantity, exponents raised', () => {
		expect(runsText(axisRuns('p', 'kPa'))).toBe('p\u2009/\u2009kPa');
		expect(runsText(axisRuns('H', 'kJ/mol'))).toBe('H\u2009/\u2009(kJ/mol)');
		expect(runsText(axisRuns('x', '1'))).toBe('x');
		expect(runsText(axisRuns('T^{-1}', '1/K', -3))).toBe('T^\u22121\u2009/\u2009(10^\u22123\u2009K^\u22121)');
		expect(unitRuns('m^2')).toEqual([
			{ text: 'm', italic: false, shift: null },
			{ text: '2', italic: false, shift: 'sup' }
		]);
	});
});

describe('numbers of a budget', () => {
	it.each([
		[0.551, '0.55'],
		[-0.11, '\u22120.11'],
		[12.34, '12'],
		[0, '0'],
		[9.96, '10'],
		[0.0000012, '1.2e\u22126'],
		[Number.NaN, '–']
	])('writes %s as %s', (value, text) => expect(contributionText(value)).toBe(text));

	it('writes shares in per cent', () => {
		expect(percentText(0.8401)).toBe('84.0');
		expect(percentText(-0.0005)).toBe('\u22120.1');
	});
});

describe('two values on one axis', () => {
	const reference = {
		value: 40.9,
		unit: 'kJ/mol',
		standardUncertainty: 0.05,
		conditions: '',
		source: '',
		display: { text: '', tex: '', html: '', speech: '' }
	};

	it('keeps their difference and reach in proportion, within the drawing', () => {
		const { measured, reference: drawn } = intervalPlaces({ difference: 0.4, expanded95: 1.3, reference });
		const scale = (measured.middle - drawn.middle) / 0.4;
		expect((drawn.high - drawn.low) / scale).toBeCloseTo(0.2, 9);
		expect((measured.high - measured.low) / scale).toBeCloseTo(2 * Math.sqrt(1.3 ** 2 - 0.1 ** 2), 9);
		for (const { low, high } of [measured, drawn]) {
			expect(low).toBeGreaterThanOrEqual(12);
			expect(high).toBeLessThanOrEqual(308);
		}
	});
});
