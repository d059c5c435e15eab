import type { ColumnDefinition, TableReading } from './types';

/** Reads pasted or uploaded text (comma, semicolon, tab) against a table's columns. */
export function readTable(_text: string, _columns: ColumnDefinition[]): TableReading {
	return { rows: [], problems: [], columns: [], delimiter: ',', rowCount: 0 };
}
