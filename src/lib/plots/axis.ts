import { placeOfFirstDigit } from '$lib/quantities';

export interface Tick {
	/** in the axis' own unit */
	value: number;
	/** along the axis, px */
	at: number;
	/** '' for a minor tick */
	text: string;
}

/** A straight scale: data from `from` to `to` drawn from px `start` to px `end` (end before start for an upward axis). */
export interface Axis {
	from: number;
	to: number;
	start: number;
	end: number;
	major: Tick[];
	minor: Tick[];
	/** the labels are the values divided by ten to this power, which belongs into the axis' title */
	exponent: number;
}

export interface AxisOptions {
	start: number;
	end: number;
	/** px that a label needs, its gap included */
	labelRoom: number;
	/** share of the span left empty at both ends */
	air?: number;
	/** same length either side of zero, for residuals */
	symmetric?: boolean;
}

const minus = '\u2212';

/** An axis that holds all values, with round ticks (steps of 1, 2 or 5 times a power of ten, minor ones between). */
export function makeAxis(
	values: readonly number[],
	{ start, end, labelRoom, air = 0.06, symmetric = false }: AxisOptions
): Axis {
	const [least, greatest] = extent(values, symmetric);
	const margin = (greatest - least) * air;
	const [from, to] = [least - margin, greatest + margin];
	const intervals = Math.max(1, Math.floor(Math.abs(end - start) / labelRoom));
	const { step, parts } = roundStep((to - from) / intervals);
	const axis: Axis = {
		from,
		to,
		start,
		end,
		major: [],
		minor: [],
		exponent: labelExponent(Math.max(Math.abs(from), Math.abs(to)))
	};
	const decimals = Math.max(0, axis.exponent - placeOfFirstDigit(step));
	// whole multiples, so that rounding does not pile up along the axis; a hair of slack for values on a tick
	const slack = 1e-9;
	for (let i = Math.ceil(from / step - slack); i <= Math.floor(to / step + slack); i += 1) {
		const value = i * step;
		const text = scaled(value, axis.exponent)
			.toFixed(decimals)
			.replace(/^-(?=0*\.?0*$)/, '')
			.replace('-', minus);
		axis.major.push({ value, at: onAxis(axis, value), text });
	}
	for (
		let i = Math.ceil((from / step) * parts - slack);
		i <= Math.floor((to / step) * parts + slack);
		i += 1
	) {
		if (i % parts === 0) continue;
		const value = (i * step) / parts;
		axis.minor.push({ value, at: onAxis(axis, value), text: '' });
	}
	return axis;
}

/** Where a value stands, px. */
export function onAxis(
	{ from, to, start, end }: Pick<Axis, 'from' | 'to' | 'start' | 'end'>,
	value: number
): number {
	return start + ((value - from) / (to - from)) * (end - start);
}

function extent(values: readonly number[], symmetric: boolean): [number, number] {
	const finite = values.filter((value) => Number.isFinite(value));
	if (finite.length === 0) return symmetric ? [-1, 1] : [0, 1];
	let least = finite.reduce((low, value) => Math.min(low, value));
	let greatest = finite.reduce((high, value) => Math.max(high, value));
	if (symmetric) {
		greatest = Math.max(Math.abs(least), Math.abs(greatest));
		least = -greatest;
	}
	const size = Math.max(Math.abs(least), Math.abs(greatest));
	// what is below any quantity of a laboratory by hundreds of powers of ten is zero on a drawing
	if (size > 1e-290 && greatest - least > size * 1e-12) return [least, greatest];
	const half = size > 1e-290 ? size * 0.05 : 1;
	return [least - half, greatest + half];
}

function roundStep(rough: number): { step: number; parts: number } {
	const power = placeOfFirstDigit(rough);
	for (const [factor, parts] of [
		[1, 5],
		[2, 4],
		[5, 5],
		[10, 5]
	] as const) {
		const step = Number(`${factor}e${power}`);
		if (step >= rough * (1 - 1e-9)) return { step, parts };
	}
	return { step: Number(`1e${power + 1}`), parts: 5 };
}

/** Plain digits from 0.01 to 99999; else multiples of a power of ten that is a multiple of three. */
function labelExponent(largest: number): number {
	const place = placeOfFirstDigit(largest);
	return largest === 0 || (place >= -2 && place <= 4) ? 0 : 3 * Math.floor(place / 3);
}

function scaled(value: number, exponent: number): number {
	return exponent === 0 ? value : value / Number(`1e${exponent}`);
}
