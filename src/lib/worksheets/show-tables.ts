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
import { textOf, type RowState } from './rows';
import type { Session } from './session';
import { plainDigits } from './shown';
import type { ColumnDefinition, ShownCell, ShownColumn, ShownRow, ShownTable } from './types';

/** Tables with everything typed and computed; a row in which nothing changed is the very one shown before. */
export function showTables(session: Session): Record<string, ShownTable> {
	const tables: Record<string, ShownTable> = {};
	for (const table of session.worksheet.tables) {
		const columns = table.columns.map(showColumn);
		const rows = (session.rows.tables.get(table.name) ?? []).map((state) => {
			state.shown ??= showRow(state, table.columns);
			return state.shown;
		});
		tables[table.name] = { name: table.name, caption: table.caption, columns, rows };
	}
	return tables;
}

function showRow(state: RowState, columns: readonly ColumnDefinition[]): ShownRow {
	return {
		id: state.row.id,
		number: state.number,
		status: state.row.status,
		...(state.row.reason === undefined ? {} : { reason: state.row.reason }),
		cells: Object.fromEntries(columns.map((column) => [column.name, showCell(state, column)]))
	};
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
		kind,
		computed: formula !== null,
		resolution
	};
}

/** What was typed stays as typed; what is computed is cut to its own uncertainty. */
function showCell(state: RowState, column: ColumnDefinition): ShownCell {
	const problem = state.cellProblems?.get(column.name) ?? null;
	const typed = textOf(state.row.cells, column.name);
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
