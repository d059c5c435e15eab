import type { Formula, MistakeDefinition, Worksheet } from './types';

/** The worksheet as somebody works it who makes the mistake. */
export function withMistake(worksheet: Worksheet, { instead, order }: MistakeDefinition): Worksheet {
	const { formulas, constants, fits } = instead;
	return {
		...withFormulas(worksheet, formulas),
		order,
		constants: worksheet.constants.map((constant) => ({ ...constant, ...own(constants, constant.name) })),
		fits: worksheet.fits.map((fit) => ({ ...fit, ...own(fits, fit.name) }))
	};
}

/** The worksheet with other formulas for the named computed columns and results; their order is the caller's part. */
export function withFormulas(worksheet: Worksheet, formulas: Readonly<Record<string, Formula>>): Worksheet {
	return {
		...worksheet,
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
		})
	};
}

function own<T>(record: Readonly<Record<string, T>>, name: string): T | undefined {
	return Object.hasOwn(record, name) ? record[name] : undefined;
}
