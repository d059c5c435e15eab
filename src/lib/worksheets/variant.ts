import type { MistakeDefinition, Worksheet } from './types';

/** The worksheet as somebody works it who makes the mistake. */
export function withMistake(worksheet: Worksheet, { instead, order }: MistakeDefinition): Worksheet {
	const { formulas, constants, fits } = instead;
	return {
		...worksheet,
		order,
		constants: worksheet.constants.map((constant) => ({ ...constant, ...own(constants, constant.name) })),
		tables: worksheet.tables.map((table) => ({
			...table,
			columns: table.columns.map((column) => {
				const formula = own(formulas, column.name);
				return formula && column.formula !== null ? { ...column, formula } : column;
			})
		})),
		results: worksheet.results.map((result) => {
			const formula = own(formulas, result.name);
			return formula ? { ...result, formula } : result;
		}),
		fits: worksheet.fits.map((fit) => ({ ...fit, ...own(fits, fit.name) }))
	};
}

function own<T>(record: Record<string, T>, name: string): T | undefined {
	return Object.hasOwn(record, name) ? record[name] : undefined;
}
