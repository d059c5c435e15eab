import { calculate, namedThings, type Calculation } from './calculation';
import { engineVersion } from './engine-version';
import { unmetRequirements } from './requirements';
import { showComparisons } from './show-comparisons';
import { showFigures, showFits } from './show-fits';
import { showTables } from './show-tables';
import { showQuantity } from './shown';
import type { Evaluation, Readings, ShownQuantity, Worksheet } from './types';
import { showWorkings } from './workings';

/**
 * Works up the readings: the same code in the browser while typing and on the server at hand-in. Never throws on
 * readings: what is missing or cannot be read is a problem of the evaluation, with its address.
 */
export function evaluate(worksheet: Worksheet, readings: Readings): Evaluation {
	const calculation = calculate(worksheet, readings);
	const comparisons = showComparisons(calculation);
	return {
		engine: engineVersion,
		problems: [...unmetRequirements(calculation), ...calculation.problems],
		quantities: showQuantities(calculation),
		tables: showTables(calculation),
		fits: showFits(calculation),
		comparisons,
		figures: showFigures(calculation),
		workings: showWorkings(calculation)
	};
}

/** The sample calculations alone, with rows chosen by table name. */
export function workingsFor(
	worksheet: Worksheet,
	readings: Readings,
	chosenRows: Readonly<Record<string, string>>
): Evaluation['workings'] {
	return showWorkings(calculate(worksheet, readings), chosenRows);
}

function showQuantities(calculation: Calculation): Record<string, ShownQuantity> {
	const quantities: Record<string, ShownQuantity> = {};
	const constants = new Map(calculation.worksheet.constants.map(({ name, value }) => [name, String(value)]));
	for (const thing of namedThings(calculation.worksheet)) {
		const quantity = calculation.names.get(thing.name);
		const typed = constants.get(thing.name) ?? calculation.parameters.get(thing.name)?.typed;
		if (quantity) quantities[thing.name] = showQuantity(quantity, thing, typed);
	}
	return quantities;
}
