import { fiveNumbers, histogram, roundEdges, type FiveNumbers } from '$lib/statistics';
import { makeAxis, onAxis, type Axis } from './axis';

export interface StripGroup {
	key: string;
	label: string;
	values: { key: string; value: number }[];
}

/** A row of points over a common axis, one row for each group. */
export interface StripDescription {
	width: number;
	height: number;
	/** along the foot */
	axis: Axis;
	groups: {
		key: string;
		label: string;
		count: number;
		/** px of the row's middle */
		y: number;
		points: { key: string; value: number; x: number; y: number }[];
		/** in data and in px; null for an empty group */
		summary: { data: FiveNumbers; x: FiveNumbers } | null;
	}[];
}

export interface StripOptions {
	width: number;
	/** px of a row */
	rowHeight?: number;
	/** px left of the axis for the groups' labels */
	labelWidth?: number;
	/** px across a point, stroke included */
	pointSize?: number;
	/** the axis reaches at least over these values, e.g. 0 and 100 */
	atLeast?: readonly [number, number];
}

const foot = 42;
const head = 8;

/**
 * Positions for a strip plot: each value a point, points that would cover each other moved apart across the row by as
 * little as possible, always in the same way for the same values. Labels, quartiles and counts come along, so that the
 * same description makes the table beside it.
 */
export function describeStrip(groups: readonly StripGroup[], options: StripOptions): StripDescription {
	const { width, rowHeight = 56, labelWidth = 120, pointSize = 8, atLeast } = options;
	const all = groups.flatMap(({ values }) => values.map(({ value }) => value));
	const axis = makeAxis([...all, ...(atLeast ?? [])], {
		start: labelWidth,
		end: width - 12,
		labelRoom: 72,
		air: atLeast ? 0.02 : 0.06
	});
	const rows = groups.map(({ key, label, values }, i) => {
		const y = head + rowHeight * (i + 0.5);
		const placed = spreadOut(values.map(({ value }) => onAxis(axis, value)), pointSize, rowHeight); // prettier-ignore
		const data = fiveNumbers(values.map(({ value }) => value));
		return {
			key,
			label,
			count: values.length,
			y,
			points: values.map(({ key: point, value }, j) => ({
				key: point,
				value,
				x: onAxis(axis, value),
				y: y + (placed[j] ?? 0)
			})),
			summary: data && { data, x: inPixels(data, axis) }
		};
	});
	return { width, height: head + rowHeight * groups.length + foot, axis, groups: rows };
}

function inPixels(data: FiveNumbers, axis: Axis): FiveNumbers {
	const at = (value: number) => onAxis(axis, value);
	return {
		minimum: at(data.minimum),
		lowerQuartile: at(data.lowerQuartile),
		median: at(data.median),
		upperQuartile: at(data.upperQuartile),
		maximum: at(data.maximum)
	};
}

/** Offsets across the row: 0, then one size up, one down, and so on, the first that is free; a full row is drawn closer. */
function spreadOut(xs: readonly number[], size: number, rowHeight: number): number[] {
	const lanes: number[][] = [];
	const lane: number[] = xs.map(() => 0);
	const inOrder = xs.map((x, i) => ({ x, i })).sort((a, b) => a.x - b.x || a.i - b.i);
	for (const { x, i } of inOrder) {
		let free = lanes.findIndex((taken) => x - (taken.at(-1) ?? -Infinity) >= size);
		if (free < 0) free = lanes.push([]) - 1;
		lanes[free]?.push(x);
		lane[i] = free;
	}
	const reach = Math.ceil((lanes.length - 1) / 2);
	const step = reach === 0 ? 0 : Math.min(size, (rowHeight / 2 - size) / reach);
	return lane.map((n) => (n % 2 === 1 ? -1 : 1) * Math.ceil(n / 2) * step);
}

export interface HistogramDescription {
	width: number;
	height: number;
	x: Axis;
	/** counts, upward */
	y: Axis;
	bars: { from: number; to: number; count: number; x: number; width: number; y: number; height: number }[];
}

/** Bars of a histogram with round edges; `edges` fixes them, for groups that are to be compared. */
export function describeHistogram(
	values: readonly number[],
	{
		width,
		height,
		edges = roundEdges(values, 10)
	}: { width: number; height: number; edges?: readonly number[] }
): HistogramDescription {
	const bins = histogram(values, edges);
	const x = makeAxis(edges, { start: 44, end: width - 12, labelRoom: 72, air: 0 });
	const most = bins.reduce((high, { count }) => Math.max(high, count), 1);
	const y = makeAxis([0, most], { start: height - foot, end: head, labelRoom: 40, air: 0 });
	const bars = bins.map(({ from, to, count }) => {
		const [left, right, top] = [onAxis(x, from), onAxis(x, to), onAxis(y, count)];
		return { from, to, count, x: left, width: right - left, y: top, height: y.start - top };
	});
	// counts are whole: ticks between them would say otherwise
	y.major = y.major
		.filter(({ value }) => Number.isInteger(value))
		.map((tick) => ({ ...tick, text: String(tick.value) }));
	y.minor = [];
	return { width, height, x, y, bars };
}
