import { makeAxis, type Axis } from './axis';
import { acrossMarks, curveMarks, dotMarks, pointMarks, standClose, upMarks, zeroMark } from './plot-marks';
import type { LinePlotData, LinePlotPoint, PlotDescription, PlotMark } from './plot-types';
import { labelRoomFor, seriesLabels } from './series-labels';

const margin = { left: 58, right: 14, top: 30, bottom: 50 };
const panelGap = 26;
/** of the height inside the margins */
const residualShare = 0.28;
/** px that a label takes along its axis with the air it needs; labels are 13 px high */
const labelRoom = { x: 72, y: 30, residual: 17 };

/**
 * A plot with two axes, ticks outward, open points with capless error bars, fits, bands, names beside several series, and a
 * residual panel below. Pure geometry: the same marks become a component, an SVG text or a page of a PDF.
 */
export function describePlot(
	data: LinePlotData,
	{ width, height }: { width: number; height: number }
): PlotDescription {
	const { series } = data;
	const all = series.flatMap(({ points }) => points);
	const curves = series.flatMap(({ curve }) => curve ?? []);
	const alone = series.filter(({ points }) => points.length > 0).length < 2;
	const withResiduals = all.some(({ residual, used }) => used && residual !== null);
	const foot = height - margin.bottom;
	const panel = withResiduals ? Math.round(residualShare * (foot - margin.top)) : 0;
	const mainFoot = withResiduals ? foot - panel - panelGap : foot;
	const spans = (value: number, u: number | null) => [value - (u ?? 0), value + (u ?? 0)];
	const x = makeAxis([...all.flatMap((p) => spans(p.x, p.ux)), ...curves.map((at) => at.x)], {
		start: margin.left,
		end: width - margin.right - labelRoomFor(series, width),
		labelRoom: labelRoom.x
	});
	const y = makeAxis(
		[...all.flatMap((p) => spans(p.y, p.uy)), ...curves.flatMap(({ low, high }) => [low, high])],
		{ start: mainFoot, end: margin.top, labelRoom: labelRoom.y }
	);
	const barred = residualsWithBars(all);
	const residual = withResiduals
		? makeAxis(
				all.flatMap((p) => (p.residual === null || !p.used ? [] : spans(p.residual, barred ? p.uy : null))),
				{ start: foot, end: foot - panel, labelRoom: labelRoom.residual, symmetric: true }
			)
		: null;
	const close = series.map((each) => standClose(each, x, y));
	const draw = (
		valueOf: (point: LinePlotPoint) => number,
		axis: Axis,
		shown: (point: LinePlotPoint) => boolean
	) =>
		series.flatMap(({ points }, index) => {
			const drawn = points.filter(shown);
			if (close[index]) return dotMarks(drawn, valueOf, x, axis);
			const barsOf = (point: LinePlotPoint) =>
				axis === residual ? { ...point, ux: null, uy: barred ? point.uy : null } : point;
			return drawn.flatMap((point) => pointMarks(barsOf(point), index, valueOf(point), x, axis));
		});
	const marks: PlotMark[] = [
		...series.flatMap(({ curve }) => (curve ? curveMarks(curve, x, y, alone) : [])),
		...draw(
			(point) => point.y,
			y,
			() => true
		)
	];
	if (residual) {
		marks.push(zeroMark(residual, x));
		const fitted = (point: LinePlotPoint) => point.residual !== null && point.used;
		marks.push(...draw((point) => point.residual ?? 0, residual, fitted));
		marks.push(...upMarks(residual, x.start), ...acrossMarks(x, foot, true));
	}
	marks.push(...upMarks(y, x.start), ...acrossMarks(x, mainFoot, !residual));
	marks.push(...seriesLabels(series, x, y, { width, top: margin.top, bottom: mainFoot }));
	return { width, height, x, y, residual, marks };
}

/** Bars that dwarf the residuals come from what all points share: they say nothing of these, and are left out beside them. */
function residualsWithBars(points: readonly LinePlotPoint[]): boolean {
	const fitted = points.filter(({ residual, used }) => residual !== null && used);
	const largest = fitted.reduce((most, { residual }) => Math.max(most, Math.abs(residual ?? 0)), 0);
	return fitted.filter(({ uy }) => (uy ?? 0) > 4 * largest).length <= fitted.length / 2;
}
