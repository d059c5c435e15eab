import { differenceIn, parseUnit, QuantityProblem } from '$lib/quantities';
import { holds } from './formula';
import { NotThere } from './lookup';
import { inUse, type RowState } from './rows';
import type { Session } from './session';
import type { Problem, RequirementDefinition } from './types';

/** What the experiment asks for and is not there yet, said while the apparatus still is. */
export function unmetRequirements(session: Session): Problem[] {
	return session.worksheet.requirements.flatMap((requirement): Problem[] => {
		const { severity, code, message } = requirement;
		switch (requirement.kind) {
			case 'parameter': {
				const { quantity, choice } = session.parameters.get(requirement.parameter) ?? {
					quantity: null,
					choice: null
				};
				if (quantity !== null || choice !== null) return [];
				return [{ severity, code, message, parameter: requirement.parameter }];
			}
			case 'rows': {
				const rows = (session.rows.tables.get(requirement.table) ?? []).filter(inUse);
				return rows.length >= requirement.minimum
					? []
					: [{ severity, code, message, table: requirement.table }];
			}
			case 'span': {
				const { table, column } = requirement;
				return spanIsMet(requirement, session) ? [] : [{ severity, code, message, table, column }];
			}
			case 'check':
				return unmetChecks(requirement, session);
		}
	});
}

function spanIsMet(requirement: Extract<RequirementDefinition, { kind: 'span' }>, session: Session): boolean {
	const rows = (session.rows.tables.get(requirement.table) ?? []).filter(inUse);
	const values = rows.flatMap((row) => row.values.get(requirement.column)?.value ?? []);
	// with a single reading or none there is no span to speak of; the number of rows is asked for elsewhere
	if (values.length < 2) return true;
	const least = values.reduce((a, b) => Math.min(a, b));
	const most = values.reduce((a, b) => Math.max(a, b));
	return differenceIn(most - least, parseUnit(requirement.unit)) >= requirement.minimum;
}

/** For every row in use of its table, or once: told with the row it concerns. */
function unmetChecks(
	requirement: Extract<RequirementDefinition, { kind: 'check' }>,
	session: Session
): Problem[] {
	const { severity, code, message, table, condition, missing } = requirement;
	const rows: (RowState | null)[] =
		table === null ? [null] : (session.rows.tables.get(table) ?? []).filter(inUse);
	return rows.flatMap((row): Problem[] => {
		if (isMet()) return [];
		if (!row || table === null) return [{ severity, code, message }];
		return [{ severity, code, message: `${session.callRow(row)}: ${message}`, table, row: row.row.id }];

		function isMet(): boolean {
			try {
				return holds(condition, session.surroundings(row));
			} catch (cause) {
				if (cause instanceof NotThere || cause instanceof QuantityProblem) return missing === 'waits';
				throw cause;
			}
		}
	});
}
