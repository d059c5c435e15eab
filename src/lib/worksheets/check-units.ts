import {
	divideUnits,
	exactly,
	intervalUnit,
	multiply,
	nameDimensionWithArticle,
	parseUnit,
	plainNumber,
	power,
	QuantityProblem,
	sameDimension,
	subtract,
	toldIn,
	unitOne,
	type Quantity,
	type Unit
} from '$lib/quantities';
import type { Fail, FieldPath } from './compile';
import { evaluateFormula, holds, isCondition, type Surroundings } from './formula';
import { childrenOf, type Leaf } from './formula-tree';
import type { FitDefinition, Formula, Worksheet } from './types';

/** Runs every formula once on stand-in values, so that a unit that does not fit shows while the experiment is written. */
export function checkUnits(worksheet: Worksheet, fail: Fail): void {
	const surroundings = standIns(worksheet);
	const attempt = (path: FieldPath, run: () => unknown): void => {
		try {
			run();
		} catch (cause) {
			if (!(cause instanceof QuantityProblem)) throw cause;
			// a domain depends on values, and these are none
			if (cause.code === 'dimension' || cause.code === 'temperature-points') fail(path, cause.message);
		}
	};
	const check = (formula: Formula, unit: string, path: FieldPath): void => {
		for (const branch of branchesOf(formula))
			attempt(path, () => toldIn(evaluateFormula(branch, surroundings), parseUnit(unit)));
		for (const condition of conditionsIn(formula)) attempt(path, () => holds(condition, surroundings));
	};
	const checkCondition = (condition: Formula | null, path: FieldPath): void => {
		for (const each of condition ? [condition, ...conditionsIn(condition)] : [])
			attempt(path, () => holds(each, surroundings));
	};
	worksheet.tables.forEach((table, t) =>
		table.columns.forEach(({ formula, when, unit }, c) => {
			const path: FieldPath = ['tables', t, 'columns', c];
			if (formula && formula.op !== 'fitted') check(formula, unit, [...path, 'formula']);
			checkCondition(when, [...path, 'when']);
		})
	);
	worksheet.results.forEach(({ formula, unit }, i) => check(formula, unit, ['results', i, 'formula']));
	worksheet.fits.forEach((fit, i) => {
		checkCondition(fit.where, ['fits', i, 'where']);
		checkFit(worksheet, fit, ['fits', i], check, fail);
	});
	worksheet.comparisons.forEach(({ quantity, reference, references }, i) => {
		const result = worksheet.results.find(({ name }) => name === quantity);
		for (const [key, one] of [['', reference] as const, ...Object.entries(references)]) {
			if (!one) continue;
			const path: FieldPath = ['comparisons', i, ...(key === '' ? ['reference'] : ['references', key])];
			attempt([...path, 'unit'], () =>
				toldIn(exactly(1, parseUnit(result?.unit ?? '1')), parseUnit(one.unit))
			);
			if (one.formula) check(one.formula, one.unit, [...path, 'formula']);
		}
	});
	worksheet.requirements.forEach((requirement, i) => {
		if (requirement.kind === 'check') checkCondition(requirement.condition, ['requirements', i, 'condition']);
	});
}

/** What does not fit in the units of one formula; null where it yields the unit wanted. */
export function checkFormulaUnit(worksheet: Worksheet, formula: Formula, unit: string): string | null {
	const surroundings = standIns(worksheet);
	try {
		for (const branch of branchesOf(formula)) {
			try {
				toldIn(evaluateFormula(branch, surroundings), parseUnit(unit));
			} catch (cause) {
				// a domain depends on values, and these are none
				if (!(cause instanceof QuantityProblem) || cause.code !== 'domain') throw cause;
			}
		}
		return null;
	} catch (cause) {
		if (!(cause instanceof QuantityProblem)) throw cause;
		return cause.message;
	}
}

function checkFit(
	worksheet: Worksheet,
	fit: FitDefinition,
	path: FieldPath,
	check: (formula: Formula, unit: string, path: FieldPath) => void,
	fail: Fail
): void {
	const unitOf = (column: string): Unit => {
		const columns = worksheet.tables.find(({ name }) => name === fit.table)?.columns;
		return parseUnit(columns?.find(({ name }) => name === column)?.unit || '1');
	};
	const unitY = intervalUnit(unitOf(fit.y));
	const unitX = fit.x === null ? unitOne : intervalUnit(unitOf(fit.x));
	const want = (index: number, wanted: Unit): void => {
		const parameter = fit.parameters[index];
		if (!parameter || sameDimension(parseUnit(parameter.unit).dimension, wanted.dimension)) return;
		const words = nameDimensionWithArticle(wanted.dimension);
		fail([...path, parameter.name, 'unit'], `${parameter.label} is ${words} here; ${parameter.unit} is not.`);
	};
	if (fit.model === 'curve' && fit.curve) {
		check(fit.curve.formula, unitText(worksheet, fit), [...path, 'formula']);
		fit.curve.starts.forEach((start, i) =>
			check(start, fit.parameters[i]?.unit ?? '1', [...path, 'parameters', i, 'start'])
		);
	} else if (fit.model === 'linear') {
		fit.terms.forEach((term, i) => {
			// term times parameter has to be of the kind of y
			const product: Formula = {
				op: 'multiply',
				left: term,
				right: { op: 'unit', unit: fit.parameters[i]?.unit ?? '1' }
			};
			check(product, intervalText(unitText(worksheet, fit)), [...path, 'terms', i, 'times']);
		});
	} else if (fit.model === 'polynomial') {
		let unit = unitY;
		fit.parameters.forEach((_, i) => {
			want(i, unit);
			unit = divideUnits(unit, unitX);
		});
	} else {
		want(0, divideUnits(unitY, unitX));
		if (fit.model !== 'origin') want(1, unitY);
	}
}

function unitText(worksheet: Worksheet, fit: FitDefinition): string {
	const columns = worksheet.tables.find(({ name }) => name === fit.table)?.columns;
	return columns?.find(({ name }) => name === fit.y)?.unit || '1';
}

function intervalText(unit: string): string {
	return unit === 'degC' ? 'K' : unit;
}

/** A value away from 0 and 1 for every leaf, so that logarithms and quotients exist. */
function standIns(worksheet: Worksheet): Surroundings {
	const units = new Map<string, string>();
	for (const { name, unit } of [...worksheet.constants, ...worksheet.parameters, ...worksheet.results])
		units.set(name, unit);
	for (const fit of worksheet.fits) for (const { name, unit } of fit.parameters) units.set(name, unit);
	for (const table of worksheet.tables) for (const { name, unit } of table.columns) units.set(name, unit);
	const value = (leaf: Leaf): Quantity => {
		if (leaf.op === 'over') return overStandIn(leaf, surroundings);
		return exactly(1.7, parseUnit(units.get(leaf.op === 'name' ? leaf.name : leaf.column) || '1'));
	};
	const surroundings: Surroundings = {
		quantity: value,
		text: () => '',
		given: () => true,
		step: () => undefined
	};
	return surroundings;
}

function overStandIn(leaf: Extract<Leaf, { op: 'over' }>, surroundings: Surroundings): Quantity {
	if (leaf.where) holds(leaf.where, surroundings);
	const [first, ...others] = leaf.arguments.map((argument) => evaluateFormula(argument, surroundings));
	if (!first) return plainNumber(1.7);
	const [x, ...places] = others;
	for (const place of places) if (x) subtract(place, x);
	switch (leaf.function) {
		case 'count':
			return plainNumber(3);
		case 's':
			return subtract(first, first);
		case 'integral':
			return multiply(power(first, plainNumber(1)), subtract(x ?? first, x ?? first));
		default:
			return first;
	}
}

/** A formula with its conditions met, and with none of them met. */
function branchesOf(formula: Formula): Formula[] {
	const choose = (part: Formula, met: boolean): Formula => {
		switch (part.op) {
			case 'if':
				return choose(met ? part.yes : part.no, met);
			case 'negate':
				return { ...part, of: choose(part.of, met) };
			case 'add':
			case 'subtract':
			case 'multiply':
			case 'divide':
			case 'power':
				return { ...part, left: choose(part.left, met), right: choose(part.right, met) };
			case 'call':
			case 'over':
				return { ...part, arguments: part.arguments.map((argument) => choose(argument, met)) };
			default:
				return part;
		}
	};
	return [choose(formula, true), choose(formula, false)];
}

function conditionsIn(formula: Formula): Formula[] {
	const inside = childrenOf(formula).flatMap(conditionsIn);
	return formula.op === 'if' || isCondition(formula)
		? [...inside, ...childrenOf(formula).filter(isCondition)]
		: inside;
}
