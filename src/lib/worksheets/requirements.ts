import { differenceIn, parseUnit } from '$lib/quantities';
import { rowsInUse, type Calculation } from './calculation';
import type { Problem, RequirementDefinition } from './types';

/** What the experiment asks for and is not there yet, said while the apparatus still is. */
export function unmetRequirements(calculation: Calculation): Problem[] {
	return calculation.worksheet.requirements.flatMap((requirement): Problem[] => {
		if (isMet(requirement, calculation)) return [];
		const { severity, code, message } = requirement;
		if (requirement.kind === 'parameter')
			return [{ severity, code, message, parameter: requirement.parameter }];
		if (requirement.kind === 'rows') return [{ severity, code, message, table: requirement.table }];
		return [{ severity, code, message, table: requirement.table, column: requirement.column }];
	});
}

function isMet(requirement: RequirementDefinition, calculation: Calculation): boolean {
	if (requirement.kind === 'parameter') return calculation.parameters.has(requirement.parameter);
	const rows = rowsInUse(calculation, requirement.table);
	if (requirement.kind === 'rows') return rows.length >= requirement.minimum;
	const values = rows.flatMap((row) => row.values.get(requirement.column)?.value ?? []);
	// with a single reading or none there is no span to speak of; the number of rows is asked for elsewhere
	if (values.length < 2) return true;
	return (
		differenceIn(Math.max(...values) - Math.min(...values), parseUnit(requirement.unit)) >=
		requirement.minimum
	);
}
