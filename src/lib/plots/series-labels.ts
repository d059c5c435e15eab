import { onAxis, type Axis } from './axis';
import type { PlotMark, PlotSeries } from './plot-types';

/** px: the shape before a name, a letter of it on average, the height of the line. */
const shapeWidth = 15;
const letterWidth = 7.2;
const lineHeight = 16;
/** Points of a series that are looked at for covering; more say nothing new. */
const mostLookedAt = 60;
const longestName = 16;

interface Place {
	x: number;
	y: number;
}
interface Box extends Place {
	width: number;
	height: number;
}
interface Standing {
	index: number;
	text: string;
	places: Place[];
}

/** px that names need right of the last points. */
export function labelRoomFor(series: readonly PlotSeries[], width: number): number {
	const shown = series.filter(({ points }) => points.length > 0);
	if (shown.length < 2) return 0;
	const longest = Math.max(...shown.map(({ label }) => nameOf(label).length));
	return Math.min(shapeWidth + longest * letterWidth, width * 0.16);
}

/**
 * Names beside their series instead of a key: each where it covers least, stands by no other series' points, and is near
 * its own, ends of series before their beginnings and middles. The same series always get the same places.
 */
export function seriesLabels(
	series: readonly PlotSeries[],
	x: Axis,
	y: Axis,
	frame: { width: number; top: number; bottom: number }
): PlotMark[] {
	const standing = series.flatMap((each, index): Standing[] => {
		const places = placesOf(each, x, y);
		return places.length === 0 ? [] : [{ index, text: nameOf(each.label), places }];
	});
	if (standing.length < 2) return [];
	const ending = standing.filter(({ places }) => (places.at(-1)?.x ?? 0) > x.end - 0.14 * (x.end - x.start));
	const marks = atTheEnd(ending, x, frame);
	const taken: Box[] = marks.flatMap((mark) =>
		mark.kind === 'label' ? [boxOf(mark.x, mark.y, mark.text)] : []
	);
	for (const own of standing) {
		if (ending.includes(own)) continue;
		const others = standing.filter((other) => other !== own);
		const box = bestBox(own, others, taken, frame, x.start);
		taken.push(box);
		const { index, text } = own;
		marks.push({
			kind: 'label',
			class: 'series-label',
			series: index,
			x: box.x,
			y: box.y + lineHeight / 2,
			text
		});
	}
	return marks;
}

/** Series that reach the right end have their names there one beneath the other, in the order of their last points. */
function atTheEnd(ending: readonly Standing[], x: Axis, frame: { top: number; bottom: number }): PlotMark[] {
	const ends = ending
		.map((standing) => ({ ...standing, at: standing.places.at(-1) ?? { x: x.end, y: frame.top } }))
		.sort((a, b) => a.at.y - b.at.y);
	const heights = spread(
		ends.map(({ at }) => at.y),
		lineHeight,
		frame.top + lineHeight / 2,
		frame.bottom - lineHeight / 2
	);
	return ends.flatMap(({ at, index, text }, i): PlotMark[] => {
		const y = heights[i] ?? at.y;
		const label: PlotMark = { kind: 'label', class: 'series-label', series: index, x: x.end + 10, y, text };
		const from = at.x + 6;
		const far = Math.abs(y - at.y) > 3 || x.end + 8 - from > 12;
		return far
			? [{ kind: 'line', class: 'leader', x1: from, y1: at.y, x2: x.end + 9, y2: y }, label]
			: [label];
	});
}

/** The least moved places that are a line apart and inside the frame: neighbours too close are pooled about their mean. */
function spread(wanted: readonly number[], apart: number, least: number, most: number): number[] {
	const pools: { sum: number; count: number }[] = [];
	wanted.forEach((place, i) => {
		let pool = { sum: place - i * apart, count: 1 };
		for (let before = pools.at(-1); before && before.sum / before.count > pool.sum / pool.count;) {
			pools.pop();
			pool = { sum: pool.sum + before.sum, count: pool.count + before.count };
			before = pools.at(-1);
		}
		pools.push(pool);
	});
	const room = most - (wanted.length - 1) * apart;
	const starts = pools.flatMap(({ sum, count }) => {
		const start = Math.max(least, Math.min(room, sum / count));
		return Array.from({ length: count }, () => start);
	});
	return starts.map((start, i) => start + i * apart);
}

function boxOf(x: number, y: number, text: string): Box {
	return { x, y: y - lineHeight / 2, width: shapeWidth + text.length * letterWidth, height: lineHeight };
}

function bestBox(
	own: Standing,
	others: readonly Standing[],
	taken: readonly Box[],
	frame: { width: number; top: number; bottom: number },
	left: number
): Box {
	const width = shapeWidth + own.text.length * letterWidth;
	let best: { box: Box; cost: number } | null = null;
	for (const { at, rank } of anchorsOf(own.places)) {
		const crowded = others.reduce((sum, { places }) => sum + (places.some((p) => near(p, at)) ? 1 : 0), 0);
		for (const box of boxesAround(at, width)) {
			const outside =
				box.x < left || box.x + width > frame.width || box.y < frame.top || box.y + box.height > frame.bottom;
			const overlapped = taken.filter((other) => overlap(box, other)).length;
			const covered = [own, ...others].reduce(
				(sum, { places }) => sum + places.filter((place) => inside(place, box)).length,
				0
			);
			const across = Math.max(box.x - at.x, at.x - box.x - width, 0);
			const up = Math.max(box.y - at.y, at.y - box.y - box.height, 0);
			const away = Math.sqrt(across * across + up * up);
			const cost =
				(outside ? 1000 : 0) +
				80 * overlapped +
				4 * covered +
				5 * crowded +
				rank +
				0.5 * Math.max(0, away - 6);
			if (best === null || cost < best.cost) best = { box, cost };
		}
	}
	return best?.box ?? { x: left, y: frame.top, width, height: lineHeight };
}

/** Where a name may belong: the end, the beginning, and places between. */
function anchorsOf(places: readonly Place[]): { at: Place; rank: number }[] {
	const last = places.length - 1;
	const shares = [1, 0, 0.85, 0.7, 0.55, 0.4, 0.25, 0.12];
	return shares.flatMap((share, i) => {
		const at = places[Math.round(share * last)];
		return at ? [{ at, rank: i === 0 ? 0 : i === 1 ? 4 : 6 }] : [];
	});
}

function boxesAround({ x, y }: Place, width: number): Box[] {
	const height = lineHeight;
	const beside = [0, -8, 8, -16, 16, -24, 24, -32, 32].flatMap((shift) => [
		{ x: x + 9, y: y - height / 2 + shift, width, height },
		{ x: x - 9 - width, y: y - height / 2 + shift, width, height }
	]);
	const across = [
		{ x: x - width / 2, y: y - height - 7, width, height },
		{ x: x - width / 2, y: y + 7, width, height },
		{ x: x - width / 2, y: y - height - 18, width, height },
		{ x: x - width / 2, y: y + 18, width, height }
	];
	return [...beside, ...across];
}

/** Points and curve in px, from left to right, thinned out. */
function placesOf({ points, curve }: PlotSeries, x: Axis, y: Axis): Place[] {
	if (points.length === 0) return [];
	const all = [...points, ...(curve ?? [])]
		.map((point) => ({ x: onAxis(x, point.x), y: onAxis(y, point.y) }))
		.sort((a, b) => a.x - b.x);
	if (all.length <= mostLookedAt) return all;
	return Array.from(
		{ length: mostLookedAt },
		(_, i) =>
		all[Math.round((i * (all.length - 1)) / (mostLookedAt - 1))] // prettier-ignore
	).filter((place) => place !== undefined);
}

function nameOf(label: string): string {
	return label.length <= longestName ? label : `${label.slice(0, longestName - 1)}…`;
}

function near(a: Place, b: Place): boolean {
	return Math.abs(a.x - b.x) < 12 && Math.abs(a.y - b.y) < 9;
}

function inside({ x, y }: Place, box: Box): boolean {
	return x > box.x - 4 && x < box.x + box.width + 4 && y > box.y - 3 && y < box.y + box.height + 3;
}

function overlap(a: Box, b: Box): boolean {
	return a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height && b.y < a.y + a.height;
}
