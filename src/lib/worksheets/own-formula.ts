import { checkFormulaUnit } from './check-units';
import { FormulaProblem, parseValue, type FormulaScope } from './formula-parser';
import { singleThings } from './naming';
import { ancestorsOf } from './relations';
import type { Formula, Worksheet } from './types';

/**
 * A formula that a team writes for a computed column or result, parsed and held against the unit declared for it: what
 * is wrong comes back in words, while it is typed.
 */
export function readOwnFormula(
	worksheet: Worksheet,
	name: string,
	text: string
): { formula: Formula } | { problem: string } {
	const table = worksheet.tables.find(({ columns }) =>
		columns.some((column) => column.name === name && column.formula !== null)
	);
	const naming =
		table?.columns.find((column) => column.name === name) ??
		worksheet.results.find((result) => result.name === name);
	if (!naming) return { problem: `"${name}" is not computed in this experiment.` };
	try {
		const formula = parseValue(text, scopeOf(worksheet, table?.name ?? null));
		const problem = checkFormulaUnit(worksheet, formula, naming.unit);
		return problem === null ? { formula } : { problem };
	} catch (cause) {
		if (!(cause instanceof FormulaProblem)) throw cause;
		return { problem: cause.message };
	}
}

function scopeOf(worksheet: Worksheet, table: string | null): FormulaScope {
	const ancestors = ancestorsOf(worksheet.tables);
	return {
		names: new Set(singleThings(worksheet).map(({ name }) => name)),
		choices: new Set(worksheet.parameters.filter(({ kind }) => kind === 'choice').map(({ name }) => name)),
		tables: new Map(
			worksheet.tables.map(({ name, columns }) => [
				name,
				{
					ancestors: 'cycle' in ancestors ? [] : (ancestors.get(name) ?? []),
					columns: new Map(
						columns.map((column) => [
							column.name,
							column.kind === 'number' ? ('number' as const) : ('text' as const)
						])
					)
				}
			])
		),
		table
	};
}
