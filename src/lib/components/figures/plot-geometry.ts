import type { FigureData } from '$lib/worksheets';

/** One axis: what it spans in data and on the drawing, and where its ticks stand. */
export interface PlotAxis {
	/** data at the two ends */
	from: number;
	to: number;
	/** px of the two ends */
	start: number;
	end: number;
	major: { at: number; text: string }[];
	minor: number[];
	/** labels are multiples of ten to this */
	exponent: number;
}

export interface PlotPoint {
	key: string;
	x: number;
	y: number;
	/** px of the ends of the error bars; null where there is none to see */
	barX: [number, number] | null;
	barY: [number, number] | null;
	used: boolean;
	series: number;
}

export interface PlotGeometry {
	width: number;
	height: number;
	x: PlotAxis;
	y: PlotAxis;
	residual: PlotAxis | null;
	points: PlotPoint[];
	residuals: PlotPoint[];
	line: { x1: number; y1: number; x2: number; y2: number } | null;
	/** svg path data of the band and of its two edges */
	band: { area: string; low: string; high: string } | null;
}

/** px: left for labels, bottom for labels and the title, top for the title of the vertical axis. */
const margin = { left: 58, right: 14, top: 30, bottom: 50 };
const between = 26;
const residualShare = 0.28;
const tickRoom = { x: 84, y: 38, residual: 19 };

/** A step of 1, 2 or 5 times a power of ten that puts at most `most` intervals into `span`. */
export function niceStep(span: number, most: number): { step: number; minors: number; exponent: number } {
	const rough = span / Math.max(1, most);
	let exponent = Math.floor(Math.log10(rough));
	for (;;) {
		for (const [factor, minors] of [
			[1, 5],
			[2, 4],
			[5, 5]
		] as const) {
			const step = factor * 10 ** exponent;
			if (step >= rough * (1 - 1e-9)) return { step, minors, exponent };
		}
		exponent += 1;
	}
}

/** Labels with power three steps of ten taken out where plain digits would be mostly zeros. */
function labelExponent(largest: number): number {
	if (largest === 0) return 0;
	const order = Math.floor(Math.log10(largest));
	return order >= -2 && order <= 4 ? 0 : 3 * Math.floor(order / 3);
}

function axis(
	values: readonly number[],
	start: number,
	end: number,
	room: number,
	symmetric = false
): PlotAxis {
	const finite = values.filter(Number.isFinite);
	let low = Math.min(...finite);
	let high = Math.max(...finite);
	if (finite.length === 0) [low, high] = [0, 1];
	if (symmetric) [low, high] = [-Math.max(-low, high), Math.max(-low, high)];
	if (high - low <= Math.abs(high) * 1e-12) {
		const half = high === 0 ? 1 : Math.abs(high) * 0.05;
		[low, high] = [low - half, high + half];
	}
	const air = (high - low) * 0.06;
	const from = low - air;
	const to = high + air;
	const { step, minors } = niceStep(to - from, Math.max(3, Math.abs(end - start) / room));
	const exponent = labelExponent(Math.max(Math.abs(from), Math.abs(to)));
	const scale = 10 ** exponent;
	const decimals = Math.max(0, -Math.floor(Math.log10(step / scale) + 1e-9));
	const first = Math.ceil(from / step - 1e-9);
	const last = Math.floor(to / step + 1e-9);
	const place = (value: number) => start + ((value - from) / (to - from)) * (end - start);
	const major: PlotAxis['major'] = [];
	for (let index = first; index <= last; index++) {
		const text = ((index * step) / scale).toFixed(decimals);
		major.push({
			at: place(index * step),
			text: text.replace(/^-(?=.*[1-9])/u, '\u2212').replace(/^-/u, '')
		});
	}
	const minor: number[] = [];
	for (let index = Math.ceil((from / step) * minors); index <= Math.floor((to / step) * minors); index++) {
		if (index % minors !== 0) minor.push(place((index * step) / minors));
	}
	return { from, to, start, end, major, minor, exponent };
}

/** Everything that is drawn, in px of a drawing `width` wide. */
export function plotGeometry(figure: FigureData, width: number): PlotGeometry {
	const all = figure.series.flatMap(({ points }, series) => points.map((point) => ({ ...point, series })));
	const hasResiduals = all.some(({ residual }) => residual !== null);
	const height = Math.round(Math.min(540, Math.max(360, width * 0.8)));
	const inner = height - margin.top - margin.bottom;
	const residualHeight = hasResiduals ? Math.round(residualShare * (inner - between)) : 0;
	const bottom = height - margin.bottom;
	const residualTop = bottom - residualHeight;
	const mainBottom = hasResiduals ? residualTop - between : bottom;

	const line = figure.line;
	const x = axis(
		[
			...all.flatMap(({ x, ux }) => [x - (ux ?? 0), x + (ux ?? 0)]),
			...(line === null ? [] : [line.from, line.to])
		],
		margin.left,
		width - margin.right,
		tickRoom.x
	);
	const y = axis(
		[
			...all.flatMap(({ y, uy }) => [y - (uy ?? 0), y + (uy ?? 0)]),
			...(line?.band.flatMap(({ low, high }) => [low, high]) ?? [])
		],
		mainBottom,
		margin.top,
		tickRoom.y
	);
	const residual = hasResiduals
		? axis(
				all.flatMap(({ residual, uy, used }) =>
					residual === null || !used ? [] : [residual - (uy ?? 0), residual + (uy ?? 0)]
				),
				bottom,
				residualTop,
				tickRoom.residual,
				true
			)
		: null;

	const on = (scale: PlotAxis, value: number) =>
		scale.start + ((value - scale.from) / (scale.to - scale.from)) * (scale.end - scale.start);
	/** A bar that the point itself covers says nothing. */
	const bar = (scale: PlotAxis, value: number, u: number | null): [number, number] | null => {
		if (u === null) return null;
		const ends: [number, number] = [on(scale, value - u), on(scale, value + u)];
		return Math.abs(ends[1] - ends[0]) > 7 ? ends : null;
	};
	const within = (value: number, scale: PlotAxis) => value >= scale.from && value <= scale.to;
	const points = all.map((point, index): PlotPoint => ({
		key: `${point.series}-${point.row}-${index}`,
		x: on(x, point.x),
		y: on(y, point.y),
		barX: bar(x, point.x, point.ux),
		barY: bar(y, point.y, point.uy),
		used: point.used,
		series: point.series
	}));
	const residuals =
		residual === null
			? []
			: all.flatMap((point, index): PlotPoint[] =>
					point.residual === null || !within(point.residual, residual)
						? []
						: [
								{
									key: `${point.series}-${point.row}-${index}`,
									x: on(x, point.x),
									y: on(residual, point.residual),
									barX: null,
									barY: bar(residual, point.residual, point.uy),
									used: point.used,
									series: point.series
								}
							]
				);
	const path = (list: readonly (readonly [number, number])[]) =>
		list.map(([px, py], index) => `${index === 0 ? 'M' : 'L'}${px.toFixed(2)} ${py.toFixed(2)}`).join('');
	const low = line?.band.map((point) => [on(x, point.x), on(y, point.low)] as const) ?? [];
	const high = line?.band.map((point) => [on(x, point.x), on(y, point.high)] as const) ?? [];
	return {
		width,
		height,
		x,
		y,
		residual,
		points,
		residuals,
		line:
			line === null
				? null
				: {
						x1: on(x, line.from),
						y1: on(y, line.intercept + line.slope * line.from),
						x2: on(x, line.to),
						y2: on(y, line.intercept + line.slope * line.to)
					},
		band:
			low.length < 2
				? null
				: { area: `${path(low)}L${path([...high].reverse()).slice(1)}Z`, low: path(low), high: path(high) }
	};
}
