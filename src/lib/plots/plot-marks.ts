import { onAxis, type Axis } from './axis';
import type { LinePlotPoint, PlotMark, PlotSeries } from './plot-types';

const tickLength = { major: 7, minor: 4 };
/** px across a point, stroke included */
const pointSize = 7;

/** A fit with its band; where several stand together, bands have no edges of their own. */
export function curveMarks(
	curve: NonNullable<PlotSeries['curve']>,
	x: Axis,
	y: Axis,
	alone: boolean
): PlotMark[] {
	if (curve.length < 2) return [];
	const edge = (side: 'low' | 'high' | 'y') =>
		curve.map((at) => `${fixed(onAxis(x, at.x))} ${fixed(onAxis(y, at[side]))}`);
	const [low, high] = [edge('low'), edge('high')];
	const marks: PlotMark[] = [
		{ kind: 'path', class: 'band', d: `M${[...low, ...high.toReversed()].join('L')}Z` }
	];
	if (alone) {
		marks.push({ kind: 'path', class: 'band-edge', d: `M${low.join('L')}` });
		marks.push({ kind: 'path', class: 'band-edge', d: `M${high.join('L')}` });
	}
	marks.push({ kind: 'path', class: 'fit', d: `M${edge('y').join('L')}` });
	return marks;
}

/** Whether the points of a series stand closer than they are wide. */
export function standClose({ points }: PlotSeries, x: Axis, y: Axis): boolean {
	if (points.length < 40) return false;
	const places = points.map((point) => ({ x: onAxis(x, point.x), y: onAxis(y, point.y) }));
	const close = places.filter((place, i) => {
		const next = places[i + 1];
		return next !== undefined && (next.x - place.x) ** 2 + (next.y - place.y) ** 2 < pointSize ** 2;
	});
	return close.length > points.length / 2;
}

/** A point with its bars; a bar that the point itself covers is left out. */
export function pointMarks(
	point: LinePlotPoint,
	series: number,
	value: number,
	x: Axis,
	y: Axis
): PlotMark[] {
	const [px, py] = [onAxis(x, point.x), onAxis(y, value)];
	const marks: PlotMark[] = [];
	const reach = (axis: Axis, u: number | null) =>
		Math.abs(((u ?? 0) * (axis.end - axis.start)) / (axis.to - axis.from));
	const [across, up] = [reach(x, point.ux), reach(y, point.uy)];
	if (across > pointSize / 2)
		marks.push({ kind: 'line', class: 'error-bar', x1: px - across, y1: py, x2: px + across, y2: py });
	if (up > pointSize / 2)
		marks.push({ kind: 'line', class: 'error-bar', x1: px, y1: py - up, x2: px, y2: py + up });
	const name = point.used ? 'point' : 'left-out';
	marks.push({ kind: 'point', class: name, series, row: point.row, x: px, y: py });
	return marks;
}

/** Points that stand closer than they are wide: dots without bars, in one stroke; small crosses for those left out. */
export function dotMarks(
	points: readonly LinePlotPoint[],
	valueOf: (point: LinePlotPoint) => number,
	x: Axis,
	y: Axis
): PlotMark[] {
	const stroke = (used: boolean, shape: (px: number, py: number) => string) =>
		points
			.filter((point) => point.used === used)
			.map((point) => shape(onAxis(x, point.x), onAxis(y, valueOf(point))))
			.join('');
	const dots = stroke(true, (px, py) => `M${fixed(px)} ${fixed(py)}h0`);
	const crosses = stroke(false, (px, py) => `M${fixed(px - 1.5)} ${fixed(py - 1.5)}l3 3m0-3l-3 3`);
	return [
		...(crosses === '' ? [] : [{ kind: 'path', class: 'crosses', d: crosses } as const]),
		...(dots === '' ? [] : [{ kind: 'path', class: 'dots', d: dots } as const])
	];
}

export function zeroMark(axis: Axis, x: Axis): PlotMark {
	const middle = onAxis(axis, 0);
	return { kind: 'path', class: 'zero', d: `M${fixed(x.start)} ${fixed(middle)}H${fixed(x.end)}` };
}

export function acrossMarks(axis: Axis, y: number, labelled: boolean): PlotMark[] {
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

export function upMarks(axis: Axis, x: number): PlotMark[] {
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
