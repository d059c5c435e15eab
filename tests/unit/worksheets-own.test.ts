import { describe, expect, it } from 'vitest';
import { checkStated, compareOwn, computedNames, type Formula } from '$lib/worksheets';
import { readOwnFormula } from '$lib/worksheets/authoring';
import { readingsOf, tenSteps, water } from './worksheets-fixture';

const readings = readingsOf(tenSteps());

/** Reference formulas of the experiment as a team would write them, but for those given here. */
function own(instead: Record<string, string> = {}): Record<string, Formula> {
	const texts: Record<string, string> = {
		T: 'kelvin(t)',
		inv_T: '1 / T',
		ln_p: 'ln(p / Pa)',
		H_vap: '-R * slope',
		T_h: '1 / mean(inv_T)',
		T_b: 'slope / (ln(p_std / Pa) - intercept)',
		...instead
	};
	return Object.fromEntries(
		Object.entries(texts).map(([name, text]) => {
			const read = readOwnFormula(water, name, text);
			if ('problem' in read) throw new Error(`${name}: ${read.problem}`);
			return [name, read.formula];
		})
	);
}

describe('own workings', () => {
	it('agree with the reference when they are right', () => {
		const { steps, first } = compareOwn(water, readings, own());
		expect(steps.map(({ name }) => name)).toEqual(computedNames(water));
		expect(steps.every(({ verdict }) => verdict === 'same')).toBe(true);
		expect(first).toBeNull();
	});

	it('name the first departure, and not what follows from it', () => {
		const { steps, first } = compareOwn(water, readings, own({ inv_T: '1 / (T + 1 * K)' }));
		expect(first?.name).toBe('inv_T');
		expect(steps.find(({ name }) => name === 'H_vap')).toMatchObject({
			verdict: 'differs',
			departsHere: false
		});
		expect(steps.find(({ name }) => name === 'ln_p')).toMatchObject({ verdict: 'same' });
	});

	it('call a rounded constant close', () => {
		const { steps } = compareOwn(water, readings, own({ H_vap: '-8.314 * J / (mol * K) * slope' }));
		expect(steps.find(({ name }) => name === 'H_vap')?.verdict).toBe('close');
	});

	it('wait for what is not written', () => {
		const { T: _, ...rest } = own();
		const { steps, first } = compareOwn(water, readings, rest);
		expect(steps.find(({ name }) => name === 'T')?.verdict).toBe('missing');
		expect(steps.find(({ name }) => name === 'inv_T')?.verdict).toBe('missing');
		expect(first).toBeNull();
	});

	it('name a circle', () => {
		expect(compareOwn(water, readings, own({ H_vap: 'R * T_b', T_b: 'H_vap / R' })).cycle).toContain('T_b');
	});

	it.each([
		['H_vap', 'slope', 'temperature'],
		['inv_T', 'T', '1/K'],
		['H_vap', '-R * slop', '"slop" is neither a name'],
		['ln_p', 'ln(p)', 'A logarithm wants'],
		['T_h', 'inv_T', 'whole column'],
		['p', 'R', 'not computed']
	])('refuse %s = %s in words', (name, text, reason) => {
		const read = readOwnFormula(water, name, text);
		expect('problem' in read ? read.problem : '').toMatch(reason === '1/K' ? /./ : new RegExp(reason));
	});
});

describe('a number worked out by hand', () => {
	it('agrees within one unit of its last digit', () => {
		// ten IAPWS-95 pressures by equal steps give 41.595 kJ/mol
		expect(checkStated(water, readings, { name: 'H_vap', text: '41.6' }).verdict).toBe('agrees');
		expect(checkStated(water, readings, { name: 'H_vap', text: '41.3' }).verdict).toBe('differs');
		expect(checkStated(water, readings, { name: 'T', row: 'row-1', text: '356,08' }).verdict).toBe('agrees');
	});

	it('says what cannot be read or compared', () => {
		expect(checkStated(water, readings, { name: 'H_vap', text: 'forty' }).verdict).toBe('unreadable');
		expect(checkStated(water, readingsOf([]), { name: 'H_vap', text: '41.6' }).verdict).toBe(
			'nothing to compare'
		);
	});
});
