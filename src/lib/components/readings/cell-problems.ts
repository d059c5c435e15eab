import type { Problem } from '$lib/worksheets';

export interface CellProblem {
	severity: 'error' | 'warning';
	message: string;
}

/** Row -> column -> what there is to say of the cell; column '' is the row as a whole. The graver of two stays. */
export function cellProblems(
	problems: readonly Problem[],
	table: string,
	columns: readonly string[]
): Record<string, Record<string, CellProblem>> {
	const found: Record<string, Record<string, CellProblem>> = {};
	for (const { severity, row, column, message, table: where } of problems) {
		if (severity === 'note' || where !== table || row === undefined) continue;
		// what is wrong with a computed value is told of the row
		const at = column !== undefined && columns.includes(column) ? column : '';
		const cells = (found[row] ??= {});
		if (!cells[at] || (cells[at].severity === 'warning' && severity === 'error'))
			cells[at] = { severity, message };
	}
	return found;
}
