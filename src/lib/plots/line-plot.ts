import { makeAxis, onAxis, type Axis } from './axis';

/** Points with a line, as an evaluation's figure gives them; all in the units of the axes. */
export interface LinePlotData {
	x: { label: string; symbol: string; unit: string };
	y: { label: string; symbol: string; unit: string };
	series: { label: string; points: LinePlotPoint[] }[];
	line: {
		slope: number;
		intercept: number;
		from: number;
		to: number;
		band: { x: number; low: number; high: number }[];
	} | null;
}

export interface LinePlotPoint {
	row: string;
	x: number;
	y: number;
	ux: number | null;
	uy: number | null;
	residual: number | null;
	used: boolean;
}

/** What is drawn, in px, in drawing order. `class` says what it is; looks are the style sheet's. */
export type PlotMark =
	| { kind: 'path'; class: 'band' | 'band-edge' | 'zero'; d: string }
	| {
			kind: 'line';
			class: 'fit' | 'error-bar' | 'axis' | 'tick';
			x1: number;
			y1: number;
			x2: number;
			y2: number;
	  }
	/** series are told apart by shape first; a point left out of the fit is a cross */
	| { kind: 'point'; class: 'point' | 'left-out'; series: number; row: string; x: number; y: number }
	| {
			kind: 'text';
			class: 'tick-label';
			x: number;
			y: number;
			anchor: 'start' | 'middle' | 'end';
			text: string;
	  };

export interface PlotDescription {
	width: number;
	height: number;
	x: Axis;
	y: Axis;
	/** null where nothing is fitted */
	residual: Axis | null;
	marks: PlotMark[];
}

const margin = { left: 58, right: 14, top: 30, bottom: 50 };
const panelGap = 26;
/** of the height inside the margins */
const residualShare = 0.28;
const tickLength = { major: 7, minor: 4 };
const pointSize = 7;
/** px that a label takes along its axis with the air it needs; labels are 13 px high */
const labelRoom = { x: 72, y: 30, residual: 17 };

/**
 * A plot with two axes, ticks outward, open points with capless error bars, line, band, and a residual panel below.
 * Pure geometry: the same marks become a component, an SVG text or a page of a PDF.
 */
export function describePlot(
	data: LinePlotData,
	{ width, height }: { width: number; height: number }
): PlotDescription {
	const points = data.series.flatMap((series, index) =>
		series.points.map((point) => ({ ...point, series: index }))
	);
	const withResiduals = points.some(({ residual, used }) => used && residual !== null);
	const foot = height - margin.bottom;
	const panel = withResiduals ? Math.round(residualShare * (foot - margin.top)) : 0;
	const mainFoot = withResiduals ? foot - panel - panelGap : foot;
	const spans = (value: number, u: number | null) => [value - (u ?? 0), value + (u ?? 0)];
	const x = makeAxis(
		[...points.flatMap((p) => spans(p.x, p.ux)), ...(data.line ? [data.line.from, data.line.to] : [])],
		{
			start: margin.left,
			end: width - margin.right,
			labelRoom: labelRoom.x
		}
	);
	const y = makeAxis(
		[
			...points.flatMap((p) => spans(p.y, p.uy)),
			...(data.line?.band.flatMap(({ low, high }) => [low, high]) ?? [])
		],
		{
			start: mainFoot,
			end: margin.top,
			labelRoom: labelRoom.y
		}
	);
	const residual = withResiduals
		? makeAxis(
				points.flatMap((p) => (p.residual === null || !p.used ? [] : spans(p.residual, p.uy))),
				{
					// prettier-ignore
					start: foot,
					end: foot - panel,
					labelRoom: labelRoom.residual,
					symmetric: true
				}
			)
		: null;
	const marks: PlotMark[] = [
		...lineMarks(data.line, x, y),
		...points.flatMap((p) => pointMarks(p, p.y, p.ux, x, y))
	];
	if (residual) {
		const middle = onAxis(residual, 0);
		marks.push({ kind: 'path', class: 'zero', d: `M${fixed(x.start)} ${fixed(middle)}H${fixed(x.end)}` });
		for (const p of points)
			if (p.residual !== null && p.used) marks.push(...pointMarks(p, p.residual, null, x, residual));
		marks.push(...upMarks(residual, x.start), ...acrossMarks(x, foot, true));
	}
	marks.push(...upMarks(y, x.start), ...acrossMarks(x, mainFoot, !residual));
	return { width, height, x, y, residual, marks };
}

function lineMarks(line: LinePlotData['line'], x: Axis, y: Axis): PlotMark[] {
	if (!line) return [];
	const edge = (side: 'low' | 'high') =>
		line.band.map((at) => `${fixed(onAxis(x, at.x))} ${fixed(onAxis(y, at[side]))}`);
	const [low, high] = [edge('low'), edge('high')];
	const height = (at: number) => onAxis(y, line.intercept + line.slope * at);
	const band: PlotMark[] =
		low.length < 2
			? []
			: [
					{ kind: 'path', class: 'band', d: `M${[...low, ...high.toReversed()].join('L')}Z` },
					{ kind: 'path', class: 'band-edge', d: `M${low.join('L')}` },
					{ kind: 'path', class: 'band-edge', d: `M${high.join('L')}` }
				];
	const [x1, x2] = [onAxis(x, line.from), onAxis(x, line.to)];
	return [...band, { kind: 'line', class: 'fit', x1, y1: height(line.from), x2, y2: height(line.to) }];
}

/** A point with its bars; a bar that the point itself covers is left out. */
function pointMarks(
	point: LinePlotPoint & { series: number },
	value: number,
	ux: number | null,
	x: Axis,
	y: Axis
): PlotMark[] {
	const [px, py] = [onAxis(x, point.x), onAxis(y, value)];
	const marks: PlotMark[] = [];
	const reach = (axis: Axis, u: number | null) =>
		Math.abs(((u ?? 0) * (axis.end - axis.start)) / (axis.to - axis.from));
	const [across, up] = [reach(x, ux), reach(y, point.uy)];
	if (across > pointSize / 2)
		marks.push({ kind: 'line', class: 'error-bar', x1: px - across, y1: py, x2: px + across, y2: py });
	if (up > pointSize / 2)
		marks.push({ kind: 'line', class: 'error-bar', x1: px, y1: py - up, x2: px, y2: py + up });
	marks.push({
		kind: 'point',
		class: point.used ? 'point' : 'left-out',
		series: point.series,
		row: point.row,
		x: px,
		y: py
	});
	return marks;
}

function acrossMarks(axis: Axis, y: number, labelled: boolean): PlotMark[] {
	const tick = (at: number, length: number): PlotMark => ({
		kind: 'line',
		class: 'tick',
		x1: at,
		y1: y,
		x2: at,
		y2: y + length
	});
	const marks: PlotMark[] = [{ kind: 'line', class: 'axis', x1: axis.start, y1: y, x2: axis.end, y2: y }];
	for (const { at } of axis.minor) marks.push(tick(at, tickLength.minor));
	for (const { at, text } of axis.major) {
		marks.push(tick(at, tickLength.major));
		if (labelled) marks.push({ kind: 'text', class: 'tick-label', x: at, y: y + 21, anchor: 'middle', text });
	}
	return marks;
}

function upMarks(axis: Axis, x: number): PlotMark[] {
	const tick = (at: number, length: number): PlotMark => ({
		kind: 'line',
		class: 'tick',
		x1: x,
		y1: at,
		x2: x - length,
		y2: at
	});
	const marks: PlotMark[] = [{ kind: 'line', class: 'axis', x1: x, y1: axis.start, x2: x, y2: axis.end }];
	for (const { at } of axis.minor) marks.push(tick(at, tickLength.minor));
	for (const { at, text } of axis.major) {
		marks.push(tick(at, tickLength.major), {
			kind: 'text',
			class: 'tick-label',
			x: x - 12,
			y: at + 4.5,
			anchor: 'end',
			text
		});
	}
	return marks;
}

function fixed(value: number): string {
	return value.toFixed(2);
}
