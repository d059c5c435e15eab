import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	engineVersion,
	evaluate,
	type Evaluation,
	type Readings,
	type Reference,
	type Worksheet
} from '$lib/worksheets';
import { readingsOf, row, tenSteps, water } from './worksheets-fixture';

function messages(evaluation: Evaluation): string[] {
	return evaluation.problems.map(({ message }) => message);
}

describe('ten readings', () => {
	const evaluation = evaluate(water, readingsOf(tenSteps()));

	it('has results, fit, figure, comparisons and workings, and no problem', () => {
		expect(evaluation.problems).toEqual([]);
		expect(evaluation.engine).toBe(engineVersion);
		expect(Object.keys(evaluation.quantities)).toEqual([
			'R',
			'p_std',
			'p_b',
			'slope',
			'intercept',
			'H_vap',
			'T_h',
			'T_b'
		]);
		expect(Object.keys(evaluation.workings)).toEqual([
			'T',
			'inv_T',
			'ln_p',
			'slope',
			'intercept',
			'H_vap',
			'T_h',
			'T_b'
		]);
		expect(Object.keys(evaluation.comparisons)).toEqual(['H_vap', 'T_b']);
		expect(evaluation.fits['line']).toMatchObject({ points: 10, degreesOfFreedom: 8, policy: 'scatter' });
	});

	it('is plain JSON', () => {
		expect(JSON.parse(JSON.stringify(evaluation))).toEqual(evaluation);
	});

	it('keeps what was typed and cuts what was computed', () => {
		const cells = evaluation.tables['readings']?.rows[0]?.cells;
		expect(cells?.['t']).toMatchObject({ text: '82.93', value: 82.93, problem: null });
		expect(cells?.['T']?.text).toBe('356.08(22)');
		expect(cells?.['ln_p']?.text).toBe('10.8842(15)');
	});

	it('lists a budget whose shares add to one, the thermometer leading for the boiling point', () => {
		for (const { budget } of Object.values(evaluation.quantities)) {
			if (budget.length > 0) expect(budget.reduce((total, { share }) => total + share, 0)).toBeCloseTo(1, 12);
		}
		expect(evaluation.quantities['T_b']?.budget[0]).toMatchObject({ source: 'thermometer' });
		expect(evaluation.quantities['T_b']?.standardUncertainty).toBeCloseTo(0.2, 2);
	});

	it('shows one sample calculation with symbols, numbers and result', () => {
		expect(evaluation.workings['H_vap']).toMatchObject({
			symbolic: '\\Delta_{\\mathrm{vap}}H = -R\\,b',
			result: '\\Delta_{\\mathrm{vap}}H = 41.60(6)~\\mathrm{kJ\\,mol^{-1}}',
			row: null
		});
		expect(evaluation.workings['H_vap']?.substituted).toMatch(
			/^\\Delta_\{\\mathrm\{vap\}\}H = -8\.314462618~/
		);
		expect(evaluation.workings['ln_p']?.substituted).toContain(
			'400 \\times 133.32237~\\mathrm{Pa}/\\mathrm{Pa}'
		);
		const [partial] = evaluation.workings['H_vap']?.partials ?? [];
		// d(-R b)/db = -R, in kJ/(mol K)
		expect(partial).toMatchObject({ symbol: 'b', unit: 'kJ/(mol K)' });
		expect(partial?.value).toBeCloseTo(-0.008314462618, 14);
	});

	it('draws the line through the points with a band about it', () => {
		const figure = evaluation.figures['line'];
		const [series] = figure?.series ?? [];
		expect(figure?.x.unit).toBe('K^-1');
		expect(series?.points).toHaveLength(10);
		for (const point of series?.points ?? []) {
			const line = (figure?.line?.intercept ?? NaN) + (figure?.line?.slope ?? NaN) * point.x;
			expect(point.y - line).toBeCloseTo(point.residual ?? NaN, 12);
		}
		for (const { low, high } of figure?.line?.band ?? []) expect(high).toBeGreaterThan(low);
	});
});

describe('what is missing or cannot be read', () => {
	it('names a bad cell as people say it and goes on without its row', () => {
		const rows = tenSteps();
		const seventh = rows[6];
		if (seventh) seventh.cells['t'] = '75,6o';
		const evaluation = evaluate(water, readingsOf(rows));
		expect(messages(evaluation)).toEqual(['Row 7, t: "75,6o" is not a number. Kept as typed.']);
		expect(evaluation.problems[0]).toMatchObject({
			table: 'readings',
			row: 'row-7',
			column: 't',
			severity: 'error'
		});
		const cells = evaluation.tables['readings']?.rows[6]?.cells;
		expect(cells?.['t']).toMatchObject({
			text: '75,6o',
			value: null,
			problem: 'Row 7, t: "75,6o" is not a number. Kept as typed.'
		});
		// the other cell of the row is still worked up
		expect(cells?.['ln_p']?.value).not.toBeNull();
		expect(evaluation.fits['line']?.points).toBe(9);
		expect(evaluation.figures['line']?.series[0]?.points).toHaveLength(9);
	});

	it('asks for barometer, temperatures and span', () => {
		const evaluation = evaluate(water, readingsOf(tenSteps().slice(0, 4), {}));
		expect(evaluation.problems.map(({ code }) => code)).toEqual([
			'no-barometer',
			'too-few-temperatures',
			'short-span'
		]);
		expect(messages(evaluation)[0]).toBe('No barometric pressure. Read it before leaving.');
		expect(evaluation.quantities['H_vap']).toBeDefined();
	});

	it.each([
		[0, 'no complete row yet'],
		[1, 'One point has no line. Add two.'],
		[2, 'Two points leave no scatter. Add one.']
	])('says why %d readings have no line', (count, words) => {
		const evaluation = evaluate(water, readingsOf(tenSteps().slice(0, count)));
		expect(messages(evaluation).some((message) => message.includes(words))).toBe(true);
		expect(evaluation.quantities['H_vap']).toBeUndefined();
		expect(messages(evaluation)).toContain(
			'Enthalpy of vaporization is not computed yet: it waits for slope of the line.'
		);
		expect(evaluation.comparisons).toEqual({});
		expect(evaluation.figures['line']?.line).toBeNull();
	});

	it('takes a line of equal temperatures for what it is', () => {
		const evaluation = evaluate(
			water,
			readingsOf(['400', '500', '600'].map((p, i) => row(`r${i}`, '90.00', p)))
		);
		expect(messages(evaluation).join()).toContain('All points have the same x');
	});

	it('leaves out aborted and excluded rows, keeps them in sight, and wants a reason', () => {
		const rows = tenSteps();
		rows.push(row('row-11', '70.00', '700', { status: 'excluded', reason: 'Thermometer above the vapour.' }));
		rows.push(row('row-12', '71.00', '700', { status: 'aborted' }));
		const evaluation = evaluate(water, readingsOf(rows));
		expect(evaluation.fits['line']?.points).toBe(10);
		expect(evaluation.figures['line']?.series[0]?.points.filter(({ used }) => !used)).toHaveLength(2);
		expect(messages(evaluation)).toEqual(['Row 12 is aborted without a reason. Write one.']);
		expect(evaluation.quantities['H_vap']).toEqual(
			evaluate(water, readingsOf(tenSteps())).quantities['H_vap']
		);
	});

	it('passes over blank rows and tells half-filled ones', () => {
		const rows = [...tenSteps(), row('blank', '', ''), row('half', '80.00', '')];
		const evaluation = evaluate(water, readingsOf(rows));
		expect(messages(evaluation)).toEqual(['Row 12, p: nothing typed. The row stays out of the workings.']);
	});

	it('keeps and names what it does not know', () => {
		const readings = readingsOf([...tenSteps()], { p_b: '756.2', humidity: '40' });
		readings.tables['other'] = [];
		const first = readings.tables['readings']?.[0];
		if (first) first.cells['colour'] = 'blue';
		expect(evaluate(water, readings).problems.map(({ code }) => code)).toEqual([
			'unknown-parameter',
			'unknown-table',
			'unknown-column'
		]);
	});

	it('asks about a value out of range, a doubtful comma and a bare plus-minus', () => {
		const rows = tenSteps();
		rows.push(row('a', '82.93', '4000'), row('b', '83.00 ± 0.1', '1,234'));
		const codes = evaluate(water, readingsOf(rows)).problems.map(({ code, row: id }) => `${id} ${code}`);
		expect(codes).toEqual([
			'a outside-plausible',
			'b plus-minus-not-stated',
			'b comma-before-three-digits',
			'b outside-plausible'
		]);
	});

	it('uses an uncertainty typed with a reading in place of the column’s own', () => {
		const rows = tenSteps();
		const first = rows[0];
		if (first) first.cells['t'] = '82.93(5)';
		const cell = evaluate(water, readingsOf(rows)).tables['readings']?.rows[0]?.cells['t'];
		expect(cell?.value).toBeCloseTo(82.93, 10);
		expect(cell?.standardUncertainty).toBeCloseTo(Math.hypot(0.05, 0.2), 12);
	});

	it('refuses a logarithm of nothing in words', () => {
		const evaluation = evaluate(water, readingsOf([...tenSteps(), row('zero', '80.00', '0')]));
		expect(messages(evaluation)).toContain('Row 11, ln_p: A logarithm wants a number above zero.');
	});

	it('never throws on readings, and shows finite numbers only', { timeout: 30_000 }, () => {
		const texts = fc.oneof(
			fc.string({ maxLength: 8 }),
			fc.double().map(String),
			fc.constantFrom('', '0', '-1', '1e308', '1e-308', '-273.15', '\u2212300', '82,93')
		);
		const rows = fc.array(fc.tuple(texts, texts, fc.constantFrom('used', 'aborted', 'excluded')), {
			maxLength: 8
		});
		fc.assert(
			fc.property(rows, texts, (list, barometer) => {
				const readings: Readings = readingsOf(
					list.map(([t, p, status], i) => ({ id: String(i), cells: { t, p }, status: status as 'used' })),
					{ p_b: barometer }
				);
				const evaluation = evaluate(water, readings);
				expect(JSON.parse(JSON.stringify(evaluation))).toEqual(evaluation);
				for (const { value, standardUncertainty } of Object.values(evaluation.quantities)) {
					expect(Number.isFinite(value)).toBe(true);
					expect(standardUncertainty === null || Number.isFinite(standardUncertainty)).toBe(true);
				}
			}),
			{ numRuns: 150, seed: 310 }
		);
	});
});

describe('comparison with the literature', () => {
	/** The water worksheet with another reference for the boiling point. */
	function withReference(change: Partial<Reference>, limit = 1): Worksheet {
		const comparisons = water.comparisons.map((comparison) =>
			comparison.name === 'T_b' && comparison.reference
				? { ...comparison, limit, reference: { ...comparison.reference, ...change } }
				: comparison
		);
		return { ...water, comparisons };
	}
	const comparisonOf = (worksheet: Worksheet) =>
		evaluate(worksheet, readingsOf(tenSteps())).comparisons['T_b'];

	it('takes the calorimetric value at the mean temperature of the readings', () => {
		const evaluation = evaluate(water, readingsOf(tenSteps()));
		const comparison = evaluation.comparisons['H_vap'];
		// between the tabulated 41.1197 at 363.15 K and 40.8861 at 368.15 K
		expect(evaluation.quantities['T_h']?.value).toBeCloseTo(365.2, 1);
		expect(comparison?.reference.value).toBeCloseTo(41.02, 2);
		expect(comparison?.reference.conditions).toContain('365.2');
		expect(comparison?.normalisedError).toBeNull();
	});

	it('has three verdicts', () => {
		expect(comparisonOf(water)?.verdict).toBe('compatible');
		expect(comparisonOf(withReference({ value: 380 }))?.verdict).toBe('not compatible');
		expect(comparisonOf(withReference({}, 0.1))?.verdict).toBe('too uncertain to tell');
		expect(comparisonOf(withReference({}, 0.1))?.sentence).toContain('decides nothing');
	});

	it('has a normalised error once the reference states an uncertainty', () => {
		const comparison = comparisonOf(withReference({ standardUncertainty: 0.5 }));
		const measured = evaluate(water, readingsOf(tenSteps())).quantities['T_b'];
		const u = Math.hypot(measured?.standardUncertainty ?? NaN, 0.5);
		expect(comparison?.standardUncertainty).toBeCloseTo(u, 12);
		expect(comparison?.normalisedError).toBeCloseTo(
			(comparison?.difference ?? NaN) / (comparison?.expanded95 ?? NaN),
			12
		);
	});

	it('does not extrapolate a reference', () => {
		const rows = tenSteps().map((each, i) => ({
			...each,
			cells: { t: String(20 + i), p: each.cells['p'] ?? '' }
		}));
		const evaluation = evaluate(water, readingsOf(rows));
		expect(evaluation.comparisons['H_vap']).toBeUndefined();
		expect(evaluation.problems.map(({ code }) => code)).toContain('no-reference');
	});
});
