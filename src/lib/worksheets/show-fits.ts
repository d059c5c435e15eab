import {
	coverageFactor,
	covariance,
	differenceIn,
	intervalUnit,
	parseUnit,
	standardUncertainty,
	unitText,
	valueIn,
	type Quantity
} from '$lib/quantities';
import { lineAt } from '$lib/regression';
import { findColumn, type Calculation, type FittedLine } from './calculation';
import { coverage, showQuantity } from './shown';
import type { ColumnDefinition, FigureData, ShownFit } from './types';

/** Points of a band: enough for a smooth edge at any width of page. */
const bandPoints = 41;

export function showFits(calculation: Calculation): Record<string, ShownFit> {
	const fits: Record<string, ShownFit> = {};
	for (const [name, fitted] of calculation.fits) {
		const { definition, fit } = fitted;
		const slope = told(calculation, definition.slope.name);
		const intercept = told(calculation, definition.intercept.name);
		const product = intervalUnit(slope.unit).factor * intervalUnit(intercept.unit).factor;
		fits[name] = {
			name,
			label: definition.label,
			model: 'line',
			policy: definition.policy,
			points: fit.points,
			degreesOfFreedom: fit.degreesOfFreedom,
			residualStandardDeviation: residualDeviation(calculation, fitted),
			chiSquared: fit.chiSquared,
			parameters: {
				slope: showQuantity(slope, definition.slope),
				intercept: showQuantity(intercept, definition.intercept)
			},
			covariance: covariance(slope, intercept) / product,
			sentence: policySentence(fitted)
		};
	}
	return fits;
}

/** In the unit of the y column when all points weigh the same, else of unit weight and without unit. */
function residualDeviation(calculation: Calculation, { definition, fit }: FittedLine): number | null {
	if (fit.residualStandardDeviation === null || definition.weights === 'stated')
		return fit.residualStandardDeviation;
	const column = findColumn(calculation.worksheet, definition.table, definition.y);
	return column ? differenceIn(fit.residualStandardDeviation, parseUnit(column.unit)) : null;
}

function policySentence({ definition, fit }: FittedLine): string {
	const weights =
		definition.weights === 'equal'
			? 'All points weigh the same.'
			: 'Points are weighted by their stated uncertainty.';
	if (definition.policy === 'scatter') {
		return `${weights} The uncertainty of the line comes from the scatter of the points about it (${fit.degreesOfFreedom} degrees of freedom), with the shared uncertainty of the instruments on top.`;
	}
	return `${weights} The uncertainty of the line comes from the stated uncertainty of the readings; chi-squared tells whether the scatter bears it out.`;
}

function told(calculation: Calculation, name: string): Quantity {
	const quantity = calculation.names.get(name);
	if (!quantity) throw new Error(`The fit left no ${name}.`);
	return quantity;
}

/** Points, line, band and residuals, all in the units of the axes. */
export function showFigures(calculation: Calculation): Record<string, FigureData> {
	const figures: Record<string, FigureData> = {};
	for (const figure of calculation.worksheet.figures) {
		const definition = calculation.worksheet.fits.find((fit) => fit.name === figure.fit);
		const x = definition && findColumn(calculation.worksheet, definition.table, definition.x);
		const y = definition && findColumn(calculation.worksheet, definition.table, definition.y);
		if (!definition || !x || !y) continue;
		const fitted = calculation.fits.get(definition.name) ?? null;
		figures[figure.name] = {
			name: figure.name,
			caption: figure.caption,
			x: axisOf(x),
			y: axisOf(y),
			series: [{ label: definition.label, points: pointsOf(calculation, definition.table, x, y, fitted) }],
			line: fitted && lineOf(fitted, x, y)
		};
	}
	return figures;
}

function axisOf({ label, symbol, unit }: ColumnDefinition): FigureData['x'] {
	return { label, symbol, unit: unitText(parseUnit(unit)) };
}

type FigurePoint = FigureData['series'][number]['points'][number];

function pointsOf(
	calculation: Calculation,
	table: string,
	x: ColumnDefinition,
	y: ColumnDefinition,
	fitted: FittedLine | null
): FigurePoint[] {
	const [unitX, unitY] = [parseUnit(x.unit), parseUnit(y.unit)];
	const residuals = new Map(fitted?.rows.map((row, i) => [row, fitted.fit.residuals[i] ?? null]));
	const sizeOf = (quantity: Quantity, unit = unitX) =>
		differenceIn(standardUncertainty(quantity), unit) || null;
	return (calculation.tables.get(table) ?? []).flatMap((row) => {
		const [valueX, valueY] = [row.values.get(x.name), row.values.get(y.name)];
		if (!valueX || !valueY) return [];
		const residual = residuals.get(row) ?? null;
		return [
			{
				row: row.row.id,
				x: valueIn(valueX, unitX),
				y: valueIn(valueY, unitY),
				ux: sizeOf(valueX),
				uy: sizeOf(valueY, unitY),
				residual: residual === null ? null : differenceIn(residual, unitY),
				used: row.counts
			}
		];
	});
}

function lineOf(
	{ definition, fit, rows }: FittedLine,
	x: ColumnDefinition,
	y: ColumnDefinition
): FigureData['line'] {
	const [unitX, unitY] = [parseUnit(x.unit), parseUnit(y.unit)];
	const values = rows.map((row) => row.values.get(definition.x)?.value ?? fit.centreX);
	const [least, greatest] = [Math.min(...values), Math.max(...values)];
	const at = lineAt(fit);
	const factors = new Map<number, number>();
	const band = Array.from({ length: bandPoints }, (_, i) => {
		const si = least + ((greatest - least) * i) / (bandPoints - 1);
		const { value, standard, degreesOfFreedom } = at(si);
		const factor = factors.get(degreesOfFreedom) ?? coverageFactor(coverage, degreesOfFreedom);
		factors.set(degreesOfFreedom, factor);
		const half = factor * standard;
		const toY = (height: number) => (height - unitY.offset) / unitY.factor;
		return { x: (si - unitX.offset) / unitX.factor, low: toY(value - half), high: toY(value + half) };
	});
	return {
		slope: (fit.slope.value * unitX.factor) / unitY.factor,
		intercept: (fit.intercept.value + fit.slope.value * unitX.offset - unitY.offset) / unitY.factor,
		from: (least - unitX.offset) / unitX.factor,
		to: (greatest - unitX.offset) / unitX.factor,
		band
	};
}
