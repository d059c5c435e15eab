import {
	standardUncertainty as standardUncertaintyOf,
	differenceIn,
	numberText,
	parseUnit,
	roundToUncertainty,
	unitHtml,
	unitText,
	valueIn
} from '$lib/quantities';
import type { Calculation } from './calculation';
import type { RowState } from './read-readings';
import { plainDigits } from './shown';
import type { ColumnDefinition, ShownCell, ShownColumn, ShownTable } from './types';

export function showTables(calculation: Calculation): Record<string, ShownTable> {
	const tables: Record<string, ShownTable> = {};
	for (const table of calculation.worksheet.tables) {
		const columns = table.columns.map(showColumn);
		const rows = (calculation.tables.get(table.name) ?? []).map((state) => ({
			id: state.row.id,
			number: state.number,
			status: state.row.status,
			...(state.row.reason === undefined ? {} : { reason: state.row.reason }),
			cells: Object.fromEntries(table.columns.map((column) => [column.name, showCell(state, column)]))
		}));
		tables[table.name] = { name: table.name, caption: table.caption, columns, rows };
	}
	return tables;
}

function showColumn({
	name,
	label,
	symbol,
	kind,
	unit: unitName,
	formula,
	resolution
}: ColumnDefinition): ShownColumn {
	const unit = kind === 'number' ? parseUnit(unitName) : null;
	return {
		name,
		label,
		symbol,
		unit: unit ? unitText(unit) : '',
		unitHtml: unit ? unitHtml(unit) : '',
		computed: formula !== null,
		resolution
	};
}

/** What was typed stays as typed; what is computed is cut to its own uncertainty. */
function showCell(state: RowState, column: ColumnDefinition): ShownCell {
	const problem = state.cellProblems.get(column.name) ?? null;
	const typed = Object.hasOwn(state.row.cells, column.name) ? (state.row.cells[column.name] ?? '') : '';
	const quantity = state.values.get(column.name);
	if (!quantity)
		return { text: column.formula === null ? typed : '', value: null, standardUncertainty: null, problem };
	const unit = parseUnit(column.unit);
	const standard = standardUncertaintyOf(quantity);
	const standardUncertainty = standard === 0 ? null : differenceIn(standard, unit);
	if (column.formula === null) {
		const plain = plainDigits(typed);
		return {
			text: typed,
			value: plain === null ? valueIn(quantity, unit) : Number(plain),
			standardUncertainty,
			problem
		};
	}
	const value = valueIn(quantity, unit);
	return {
		text: numberText(roundToUncertainty(value, standardUncertainty)),
		value,
		standardUncertainty,
		problem
	};
}
