import {
	coverageFactor,
	differenceIn,
	parseUnit,
	QuantityProblem,
	standardUncertainty,
	unitText,
	valueIn,
	type Quantity,
	type Unit
} from '$lib/quantities';
import type { Fitted } from './fit-step';
import { holds } from './formula';
import { NotThere } from './lookup';
import { keyOf, rowSlugs } from './named';
import { findColumn } from './naming';
import { inUse, type RowState } from './rows';
import type { Session } from './session';
import { coverage } from './shown';
import { fitsByName } from './show-fits';
import type { ColumnDefinition, FigureData, FigureDefinition, FitDefinition } from './types';

/** Points of a band: enough for a smooth edge at any width of page. */
const bandPoints = 41;

type Series = FigureData['series'][number];

/** Points, lines, bands and residuals, all in the units of the axes. */
export function showFigures(session: Session, kept: WeakMap<object, Series>): Record<string, FigureData> {
	const figures: Record<string, FigureData> = {};
	for (const figure of session.worksheet.figures) {
		const definition = session.worksheet.fits.find((fit) => fit.name === figure.fit);
		const axes = axesOf(session, figure, definition);
		if (!axes) continue;
		const { x, y, table } = axes;
		const series = definition
			? fitSeries(session, definition, table, x, y, kept)
			: tableSeries(session, table, figure.by, x, y);
		const single =
			series.length === 1 && definition?.per === null ? session.fits.get(definition.name) : undefined;
		figures[figure.name] = {
			name: figure.name,
			caption: figure.caption,
			x: axisOf(x),
			y: axisOf(y),
			series,
			line: single ? straightLine(single, x, y, series[0]?.curve ?? []) : null
		};
	}
	return figures;
}

function axesOf(session: Session, figure: FigureDefinition, fit: FitDefinition | undefined) {
	const table = fit?.table ?? figure.table ?? '';
	const x = findColumn(session.worksheet, table, fit ? (fit.x ?? '') : (figure.x ?? ''));
	const y = findColumn(session.worksheet, table, fit?.y ?? figure.y ?? '');
	return x && y ? { x, y, table } : null;
}

function axisOf({ label, symbol, unit }: ColumnDefinition): FigureData['x'] {
	return { label, symbol, unit: unitText(parseUnit(unit)) };
}

function fitSeries(
	session: Session,
	definition: FitDefinition,
	table: string,
	x: ColumnDefinition,
	y: ColumnDefinition,
	kept: WeakMap<object, Series>
): Series[] {
	if (definition.per === null) {
		const fitted = session.fits.get(definition.name) ?? null;
		const rows = session.rows.tables.get(table) ?? [];
		return [seriesOf(definition.label, null, shownRows(session, definition, rows, fitted), fitted, x, y)];
	}
	const byRow = new Map([...fitsByName(session)].flatMap(({ row, fitted }) => (row && fitted.definition === definition ? [[row, fitted] as const] : []))); // prettier-ignore
	return [...rowSlugs(session, definition.per)].map(([head, slug]) => {
		const fitted = byRow.get(head) ?? null;
		const key = keyOf(session.worksheet, head);
		const known = fitted && kept.get(fitted);
		if (known && known.label === key && known.key === slug) return known;
		const rows = shownRows(session, definition, session.rows.familyOf(table, head), fitted);
		const series = seriesOf(key, slug, rows, fitted, x, y);
		if (fitted) kept.set(fitted, series);
		return series;
	});
}

function tableSeries(
	session: Session,
	table: string,
	by: string | null,
	x: ColumnDefinition,
	y: ColumnDefinition
): Series[] {
	if (by === null) return [seriesOf(y.label, null, session.rows.tables.get(table) ?? [], null, x, y)];
	return [...rowSlugs(session, by)].map(([head, slug]) =>
		seriesOf(keyOf(session.worksheet, head), slug, session.rows.familyOf(table, head), null, x, y)
	);
}

/** Points of the fit, and those left out because their row is; rows that the fit is not for are not shown. */
function shownRows(
	session: Session,
	{ where }: FitDefinition,
	rows: readonly RowState[],
	fitted: Fitted | null
): readonly RowState[] {
	if (!where) return rows;
	const used = new Set(fitted?.rows);
	return rows.filter((row) => {
		if (used.has(row)) return true;
		try {
			return !inUse(row) && holds(where, session.surroundings(row));
		} catch (cause) {
			if (cause instanceof NotThere || cause instanceof QuantityProblem) return false;
			throw cause;
		}
	});
}

function seriesOf(
	label: string,
	key: string | null,
	rows: readonly RowState[],
	fitted: Fitted | null,
	x: ColumnDefinition,
	y: ColumnDefinition
): Series {
	const [unitX, unitY] = [parseUnit(x.unit), parseUnit(y.unit)];
	const residuals = new Map(fitted?.rows.map((row, i) => [row, fitted.fit.residuals[i] ?? null]));
	const sizeOf = (quantity: Quantity, unit: Unit) =>
		differenceIn(standardUncertainty(quantity), unit) || null;
	const points = rows.flatMap((row) => {
		const [valueX, valueY] = [row.values.get(x.name), row.values.get(y.name)];
		if (!valueX || !valueY) return [];
		const residual = residuals.get(row) ?? null;
		return [
			{
				row: row.row.id,
				x: valueIn(valueX, unitX),
				y: valueIn(valueY, unitY),
				ux: sizeOf(valueX, unitX),
				uy: sizeOf(valueY, unitY),
				residual: residual === null ? null : differenceIn(residual, unitY),
				used: fitted ? residuals.has(row) : inUse(row)
			}
		];
	});
	const curve = fitted && curveOf(fitted, unitX, unitY);
	return { label, ...(key === null ? {} : { key }), points, ...(curve ? { curve } : {}) };
}

/** The fit and its band over the points it runs through. */
function curveOf({ definition, fit, rows }: Fitted, unitX: Unit, unitY: Unit): Series['curve'] | null {
	const { at } = fit;
	if (!at || definition.x === null) return null;
	const name = definition.x;
	const values = rows.flatMap((row) => row.values.get(name)?.value ?? []);
	if (values.length === 0) return null;
	const least = values.reduce((a, b) => Math.min(a, b));
	const greatest = values.reduce((a, b) => Math.max(a, b));
	const factors = new Map<number, number>();
	const toY = (height: number) => (height - unitY.offset) / unitY.factor;
	return Array.from({ length: bandPoints }, (_, i) => {
		const si = least + ((greatest - least) * i) / (bandPoints - 1);
		const { value, standard, degreesOfFreedom } = at(si);
		const factor = factors.get(degreesOfFreedom) ?? coverageFactor(coverage, degreesOfFreedom);
		factors.set(degreesOfFreedom, factor);
		const half = factor * standard;
		return {
			x: (si - unitX.offset) / unitX.factor,
			y: toY(value),
			low: toY(value - half),
			high: toY(value + half)
		};
	});
}

/** What a straight line's figure says in numbers; null for other kinds. */
function straightLine(
	{ fit }: Fitted,
	x: ColumnDefinition,
	y: ColumnDefinition,
	curve: NonNullable<Series['curve']>
): FigureData['line'] {
	const first = curve[0];
	const last = curve.at(-1);
	if (!fit.line || !first || !last) return null;
	const [unitX, unitY] = [parseUnit(x.unit), parseUnit(y.unit)];
	const { slope, intercept } = fit.line;
	return {
		slope: (slope.value * unitX.factor) / unitY.factor,
		intercept: (intercept.value + slope.value * unitX.offset - unitY.offset) / unitY.factor,
		from: first.x,
		to: last.x,
		band: curve.map((point) => ({ x: point.x, low: point.low, high: point.high }))
	};
}
