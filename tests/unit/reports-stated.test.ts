import { describe, expect, it } from 'vitest';
import { checkReport, compareStated, parseUnit, projectSection, statedValues } from '$lib/reports';
import { evaluation, quantity } from './reports-fixture';

const known = evaluation();

describe('parseUnit', () => {
	it.each([
		['kJ/mol', 'J mol-1', 3],
		['kJ mol-1', 'J mol-1', 3],
		['kJ mol^-1', 'J mol-1', 3],
		['kJ mol^{-1}', 'J mol-1', 3],
		['kJ·mol⁻¹', 'J mol-1', 3],
		['kJ\u2009mol−1', 'J mol-1', 3],
		['kJ per mol', 'J mol-1', 3],
		['J/(mol K)', 'J K-1 mol-1', 0],
		['J/mol/K', 'J K-1 mol-1', 0],
		['J mol-1 K-1', 'J K-1 mol-1', 0],
		['J K-1 mol-1', 'J K-1 mol-1', 0],
		['K', 'K', 0],
		['1/K', 'K-1', 0],
		['mK', 'K', -3],
		['µm', 'm', -6],
		['μs', 's', -6],
		['kg', 'g', 3],
		['cm3', 'm3', -6],
		['cm³', 'm3', -6],
		['mol/L', 'L-1 mol', 0],
		['hPa', 'Pa', 2],
		['torr', 'torr', 0],
		['Torr', 'torr', 0],
		['mmHg', 'mmHg', 0],
		['°C', '°C', 0],
		['min', 'min', 0],
		['h', 'h', 0],
		['m/s^2', 'm s-2', 0],
		['1', '', 0],
		['K/K', '', 0]
	])('%s', (text, key, power) => expect(parseUnit(text)).toEqual({ key, power }));

	it.each(['', 'kelvins', 'kk', 'x/mol', 'mol/', 'J/(mol', 'and', 'K2x', 'constructor'])(
		'"%s" is no unit',
		(text) => expect(parseUnit(text)).toBeNull()
	);
});

describe('statedValues', () => {
	/** number, unit and uncertainty as scanned, with the words of the projection they stand for */
	function scan(source: string): string[] {
		const points = [...projectSection(source).text];
		return statedValues(source).map(({ digits, exponent, uncertainty, unit, start, end }) => {
			const words = points.slice(start, end).join('');
			return `${digits}${exponent === 0 ? '' : `e${exponent}`} ±${uncertainty} [${unit.key}, ${unit.power}] "${words}"`;
		});
	}

	it.each([
		['It was 41.3(6) kJ/mol.', '41.3 ±0.6 [J mol-1, 3] "41.3(6) kJ/mol"'],
		['It was 41.3 ± 0.6 kJ/mol.', '41.3 ±0.6 [J mol-1, 3] "41.3 ± 0.6 kJ/mol"'],
		['It was (41.3 +/- 0.6) kJ mol-1, so', '41.3 ±0.6 [J mol-1, 3] "41.3 +/- 0.6) kJ mol-1"'],
		['It was 41.3(0.6) kJ/mol', '41.3 ±0.6 [J mol-1, 3] "41.3(0.6) kJ/mol"'],
		['It was 372.9 K.', '372.9 ±null [K, 0] "372.9 K"'],
		['It was 372.9\u2009K', '372.9 ±null [K, 0] "372.9\u2009K"'],
		['T=372.9K;', '372.9 ±null [K, 0] "372.9K"'],
		['It was −4.2 kJ', '-4.2 ±null [J, 3] "−4.2 kJ"'],
		['It was -4,2 kJ', '-4.2 ±null [J, 3] "-4,2 kJ"'],
		['from 370-375 K', '375 ±null [K, 0] "375 K"'],
		['It was 1.2 × 10^5 Pa', '1.2e5 ±null [Pa, 0] "1.2 × 10^5 Pa"'],
		['It was 1.23(4)×10⁻⁵ m', '1.23e-5 ±4e-7 [m, 0] "1.23(4)×10⁻⁵ m"'],
		['It was 1.2e-5 m', '1.2e-5 ±null [m, 0] "1.2e-5 m"'],
		['It was 10\u2009000 Pa', '10000 ±null [Pa, 0] "10\u2009000 Pa"'],
		['It was 5 %', '5 ±null [%, 0] "5 %"'],
		['**41.3** kJ/mol', '41.3 ±null [J mol-1, 3] "41.3 kJ/mol"'],
		['At $T = 372.9\\,\\mathrm{K}$ it', '372.9 ±null [K, 0] "T = 372.9\\,\\mathrm{K}"'],
		[
			'$(41.3 \\pm 0.6)~\\mathrm{kJ\\,mol^{-1}}$',
			'41.3 ±0.6 [J mol-1, 3] "(41.3 \\pm 0.6)~\\mathrm{kJ\\,mol^{-1}}"'
		],
		['$41.3$ kJ/mol', '41.3 ±null [J mol-1, 3] "41.3 kJ/mol"'],
		['$1.2 \\times 10^{5}$ Pa', '1.2e5 ±null [Pa, 0] "1.2 \\times 10^{5} Pa"'],
		['at $99.8\\,^\\circ$C', '99.8 ±null [°C, 0] "99.8\\,^\\circC"']
	])('reads %s', (source, expected) => expect(scan(source)).toEqual([expected]));

	it.each([
		'In 2026 and',
		'Figure 3 shows',
		'at 10:30 and',
		'room 12 mol',
		'H2 K',
		'1,000 K',
		'x_3 K',
		'`372.9 K`',
		'```\n372.9 K\n```',
		':value[T_b] K',
		'in 3 mins',
		'5 and',
		'version 1.2.3 K'
	])('finds nothing in %j', (source) => {
		const inRoom = source === 'room 12 mol' ? ['12 ±null [mol, 0] "12 mol"'] : [];
		expect(scan(source)).toEqual(inRoom);
	});

	it('knows block and place', () => {
		const found = statedValues('# H\n\n\u{1F9EA} 1 K\n\n- 2 K\n- 3 K');
		expect(found.map(({ block, start, end, digits }) => [block, start, end, digits])).toEqual([
			[1, 4, 7, '1'],
			[2, 9, 12, '2'],
			[2, 13, 16, '3']
		]);
	});
});

describe('compareStated', () => {
	function lines(source: string) {
		return compareStated(source, known, 2).map(({ kind, block, name, stated, agrees, short }) => ({
			kind,
			block,
			name,
			stated,
			agrees,
			short: short.replaceAll('\u2009', ' ')
		}));
	}

	it('has a tick for a linked value and for one typed as the workings round it', () => {
		expect(lines('A :value[H_vap].\n\nB 373.5 K, 41.6(6) kJ/mol and 41620 J/mol.')).toEqual([
			{ kind: 'linked', block: '2.1', name: 'H_vap', stated: '41.6(6) kJ mol-1', agrees: true, short: '' },
			{ kind: 'typed', block: '2.2', name: 'T_b', stated: '373.5 K', agrees: true, short: '' },
			{ kind: 'typed', block: '2.2', name: 'H_vap', stated: '41.6(6) kJ/mol', agrees: true, short: '' },
			{ kind: 'typed', block: '2.2', name: 'H_vap', stated: '41620 J/mol', agrees: true, short: '' }
		]);
	});

	it('has the departure in full, in multiples of the uncertainty', () => {
		const [line] = compareStated('It boils at 372.9 K.', known, 3);
		expect(line).toMatchObject({
			block: '3.1',
			start: 12,
			end: 19,
			name: 'T_b',
			label: 'Boiling temperature',
			agrees: false,
			recomputed: '373.5(3) K',
			sentence: 'Stated 372.9 K; workings give 373.5(3) K.'
		});
		expect(line?.departure).toBeCloseTo((372.9 - 373.48) / 0.3, 10);
		expect(line?.short.replaceAll('\u2009', ' ')).toBe('373.5(3) K, 1.9 u');
		expect(lines('46.1 kJ/mol')[0]).toMatchObject({ name: 'H_vap', short: '41.6(6) kJ mol-1, 7.5 u' });
		expect(lines('44.6 kJ/mol')[0]?.short).toBe('41.6(6) kJ mol-1, 5 u');
		expect(lines('376.7 K')[0]?.short).toBe('373.5(3) K, 11 u');
	});

	it('reads degrees Celsius against kelvins', () => {
		// 373.48 K is 100.33 °C.
		expect(lines('100.33 °C')[0]).toMatchObject({ name: 'T_b', agrees: true });
		expect(lines('99.8 °C')[0]).toMatchObject({ name: 'T_b', agrees: false, short: '373.5(3) K, 1.8 u' });
	});

	it.each(['298.15 K', '360 K', '380 K', '41.6 J/mol', '41.6 kJ', '756 torr at 101 kPa', '25 mL', '0.5 K'])(
		'says nothing about %s',
		(source) => {
			expect(lines(source).filter(({ agrees }) => !agrees)).toEqual([]);
			if (!source.startsWith('756')) expect(lines(source)).toEqual([]);
		}
	);

	it('does not take a literature value for a result', () => {
		expect(lines('The handbook gives 40.65 kJ/mol.')).toEqual([]);
		expect(lines('The handbook gives 40.7 kJ/mol.')).toEqual([]);
		expect(lines('We found 40.9 kJ/mol.')).toHaveLength(1);
	});

	it('compares exact values by their digits alone', () => {
		expect(lines('756.2 torr')[0]).toMatchObject({ name: 'p_b', agrees: true });
		expect(lines('756.3 torr')).toEqual([]);
	});

	it('compares stated uncertainties too', () => {
		const of = (source: string) => compareStated(source, known, 1)[0]?.uncertaintyAgrees;
		expect(of('41.6(6) kJ/mol')).toBe(true);
		expect(of('41.6 ± 0.62 kJ/mol')).toBe(true);
		expect(of('41.6(3) kJ/mol')).toBe(false);
		expect(of('41.6 kJ/mol')).toBeNull();
		expect(compareStated('41.6(3) kJ/mol', known, 1)[0]?.sentence).toContain(
			'The stated uncertainty differs.'
		);
	});

	it('prefers the value that agrees, then the nearest in uncertainties', () => {
		const two = {
			...known,
			quantities: { a: quantity('a', 300, 5, 'K', '300(5) K'), b: quantity('b', 302, 0.4, 'K', '302.0(4) K') }
		};
		expect(compareStated('302 K', two, 1)[0]?.name).toBe('b');
		expect(compareStated('301 K', two, 1)[0]?.name).toBe('a');
	});
});

describe('checkReport', () => {
	const check = (sections: Record<string, string>, shown: typeof known | null = known) =>
		checkReport(
			Object.entries(sections).map(([key, source]) => ({ key, source })),
			shown
		).map((entries) =>
			entries.map(({ code, block, met, message }) => `${met ? 'met' : 'open'} ${code} ${block}: ${message}`)
		);

	it('holds an abstract to one paragraph with its best values', () => {
		expect(check({ abstract: 'We found :value[H_vap].' })).toEqual([
			[
				'met abstract-one-paragraph null: One paragraph.',
				'met abstract-gives-values null: Gives H_vap.',
				'met value-has-uncertainty null: Every result has its uncertainty.',
				'met link-known null: The link leads to the workings.'
			]
		]);
		expect(check({ abstract: 'One.\n\nTwo.\n\nThree.' })).toEqual([
			[
				'open abstract-one-paragraph 1.2: 3 blocks. An abstract is one paragraph.',
				'open abstract-gives-values null: No linked value. Give the best values found, each as a link.'
			]
		]);
		expect(check({ abstract: '' })[0]?.[0]).toBe(
			'open abstract-one-paragraph null: No abstract yet. Write one paragraph.'
		);
		expect(check({ abstract: '- a list' })[0]?.[0]).toBe(
			'open abstract-one-paragraph null: Not a paragraph. An abstract is one paragraph.'
		);
		expect(check({ abstract: 'Is :value[nope].' })[0]?.[1]).toMatch(/^open abstract-gives-values/);
		expect(check({ other: 'One.\n\nTwo.' })).toEqual([[]]);
	});

	it('finds results without uncertainty, and leaves other numbers alone', () => {
		expect(check({ results: 'In 25 mL at 298 K.\n\nIt boils at 373.2 K.' })).toEqual([
			[
				'open value-has-uncertainty 1.2: 373.2 K stands without uncertainty. Link it: :value[T_b] gives 373.5(3) K.'
			]
		]);
		expect(check({ results: 'It boils at 373.2(3) K.' })).toEqual([
			['met value-has-uncertainty null: Every result has its uncertainty.']
		]);
		expect(check({ results: 'It boils at 373.2 K.' }, null)).toEqual([[]]);
	});

	it('finds figures and tables nobody mentions, in any section', () => {
		const results = '::figure[line]\n\n::table[readings]';
		expect(check({ results })[0]?.slice(0, 2)).toEqual([
			'open figure-mentioned 1.1: Nobody mentions Figure 1. Say what it shows.',
			'open figure-mentioned 1.2: Nobody mentions Table 1. Say what it shows.'
		]);
		const met = [
			'met figure-mentioned 1.1: Figure 1 is mentioned.',
			'met figure-mentioned 1.2: Table 1 is mentioned.'
		];
		for (const discussion of [
			'See Figure 1 and Table 1.',
			'See :figure[line]; Tables 1 and 2.',
			'Fig. 1, table 1.',
			'Figs. 1-3; Tab. 1',
			'Figures 0 to 2; Table\u00a01'
		]) {
			expect(check({ results, discussion })[0]?.slice(0, 2)).toEqual(met);
		}
		expect(check({ results, discussion: 'Figure 11 and figurine 1' })[0]?.[0]).toMatch(/^open/);
	});

	it('finds links to names that do not exist', () => {
		expect(check({ results: 'A :value[Hvap].\n\n::figure[lin]' })[0]).toEqual([
			'open figure-mentioned 1.2: Nobody mentions Figure 1. Say what it shows.',
			'open link-known 1.1: No value named Hvap. Nearest: H_vap. There are: H_vap, line.slope, line.intercept, T_b, p_b.',
			'open link-known 1.2: No figure named lin. There is: line.'
		]);
		expect(check({ results: 'A :value[T_b] :value[H_vap].' })[0]?.[1]).toBe(
			'met link-known null: All 2 links lead to the workings.'
		);
	});
});
