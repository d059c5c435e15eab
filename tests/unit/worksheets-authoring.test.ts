import { describe, expect, it } from 'vitest';
import { readTemplate, WorksheetSchemaProblem } from '$lib/worksheets/authoring';
import { FormulaProblem, parseValue, type FormulaScope } from '../../src/lib/worksheets/formula-parser';
import { templateFiles, water } from './worksheets-fixture';

const yaml = templateFiles['template.yaml'] ?? '';

/** The problem of the template with one text in it replaced by another. */
function problemWith(before: string, after: string): WorksheetSchemaProblem {
	expect(yaml).toContain(before);
	try {
		readTemplate({ ...templateFiles, 'template.yaml': yaml.replace(before, after) }, 'templates/x');
	} catch (cause) {
		if (cause instanceof WorksheetSchemaProblem) return cause;
		throw cause;
	}
	throw new Error('It was taken.');
}

function lineOf(text: string): number {
	return yaml.slice(0, yaml.indexOf(text)).split('\n').length;
}

describe('the worksheet of the vaporization of water', () => {
	it('puts everything after what it needs', () => {
		expect(water.order).toEqual([
			{ kind: 'column', table: 'readings', column: 'T', local: true },
			{ kind: 'column', table: 'readings', column: 'inv_T', local: true },
			{ kind: 'column', table: 'readings', column: 'ln_p', local: true },
			{ kind: 'fit', name: 'line' },
			{ kind: 'result', name: 'H_vap' },
			{ kind: 'result', name: 'T_h' },
			{ kind: 'result', name: 'T_b' }
		]);
	});

	it('has five sections with owners and six criteria with five levels', () => {
		expect(water.outline.map(({ key, owner }) => `${key} ${owner}`)).toEqual([
			'abstract author',
			'introduction author',
			'method team',
			'results team',
			'discussion author'
		]);
		expect(water.rubrics.report.criteria).toHaveLength(6);
		for (const { levels } of water.rubrics.report.criteria) {
			expect(levels.map(({ level }) => level)).toEqual([0, 1, 2, 3, 4]);
			expect(new Set(levels.map(({ text }) => text)).size).toBe(5);
		}
		expect(water.rubrics.report.criteria.reduce((sum, { weight }) => sum + weight, 0)).toBe(100);
	});
});

describe('what does not hold together', () => {
	it.each([
		['formula: 1 / T', 'formula: 1 / Temperature', /neither a name of this experiment nor a unit/],
		['formula: 1 / T', 'formula: ln(T)', /A logarithm wants a number without unit; this is a temperature/],
		['formula: -R * slope', 'formula: -R * ln_p', /whole column here. Put it into mean\(ln_p\)/],
		['formula: kelvin(t)', 'formula: 1 / inv_T', /circle: T, inv_T, T/],
		[
			'formula: 1 / mean(inv_T)',
			'formula: mean(inv_T)',
			/Temperature wanted; this is a reciprocal temperature/
		],
		['x: inv_T', 'x: inverse', /"inverse" is not a number column of readings/],
		['fit: line', 'fit: curve', /no fit "curve"/],
		['name: T_h', 'name: T', /"T" is the name of column T of readings already/],
		['unit: J/(mol K)', 'unit: J/mol K', /can be read in two ways/],
		['size: 0.1', 'size: -0.1', /Too small|>0/],
		['policy: scatter', 'policy: larger', /scatter/]
	])('refuses "%s" as "%s" with its line', (before, after, reason) => {
		const problem = problemWith(before, after);
		expect(problem.reason).toMatch(reason);
		expect(problem.file).toBe('templates/x/template.yaml');
		expect(problem.message).toContain(`line ${problem.line}`);
	});

	it('names the line of the field itself', () => {
		expect(problemWith('formula: 1 / T', 'formula: 1 / Temperature')).toMatchObject({
			line: lineOf('formula: 1 / T'),
			field: 'tables[1].columns[5].formula'
		});
	});

	it('tells a text that is not YAML, and a missing guide', () => {
		expect(problemWith('slug: vaporization-of-water', 'slug: [').line).not.toBeNull();
		expect(() => readTemplate({ 'template.yaml': yaml }, 'templates/x')).toThrow(
			'templates/x/guide.md: The file is missing.'
		);
	});
});

describe('formulas', () => {
	const scope: FormulaScope = {
		names: new Set(['a', 'slope']),
		choices: new Set(),
		tables: new Map([['data', { ancestors: [], columns: new Map([['x', 'number' as const]]) }]]),
		table: 'data'
	};

	it('is a JSON tree', () => {
		expect(parseValue('ln(x / Pa) + 2 a', scope)).toEqual({
			op: 'add',
			left: {
				op: 'call',
				function: 'ln',
				arguments: [
					{
						op: 'divide',
						left: { op: 'column', table: 'data', column: 'x' },
						right: { op: 'unit', unit: 'Pa' }
					}
				]
			},
			right: { op: 'multiply', left: { op: 'number', value: 2, text: '2' }, right: { op: 'name', name: 'a' } }
		});
	});

	it.each([
		'import("fs")',
		'a.constructor',
		'a = 3',
		'[1, 2]',
		'f(x) = x',
		'"text"',
		'x ? 1 : 2',
		'a; a',
		'eval(a)',
		'a!',
		'x > 1',
		'cosh(a)',
		'ln(a, a)',
		'mean(a)',
		'1 +',
		'a["b"]',
		'toString(a)',
		'__proto__'
	])('does not take %s', (text) => {
		expect(() => parseValue(text, scope)).toThrow(FormulaProblem);
	});
});
