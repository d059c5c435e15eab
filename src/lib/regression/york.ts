import type { Quantity } from '$lib/quantities';
import { FitProblem } from './problems';

/** Variances and covariance of a point's reading-scope uncertainty, SI. */
export interface Spread {
	readonly xx: number;
	readonly yy: number;
	readonly xy: number;
}

/** A solved line about the weighted mean of its adjusted points. */
export interface YorkLine {
	readonly slope: number;
	readonly centreX: number;
	readonly centreY: number;
	readonly w: readonly number[];
	readonly total: number;
	/** adjusted x about centreX */
	readonly deviationX: readonly number[];
	/** sum of w times the square of that */
	readonly xx: number;
	readonly iterations: number;
}

/** @throws FitProblem where a point states none on either axis, or a correlation is not one */
export function readingSpreads(
	x: readonly Quantity[],
	y: readonly Quantity[],
	correlation: number | readonly number[] | undefined
): Spread[] {
	return x.map((each, i) => {
		const other = y[i];
		let [xx, yy, xy] = [0, 0, 0];
		for (const [source, part] of each.parts) {
			if (source.component.scope !== 'reading') continue;
			xx += part * part;
			xy += part * (other?.parts.get(source) ?? 0);
		}
		for (const [source, part] of other?.parts ?? []) {
			if (source.component.scope === 'reading') yy += part * part;
		}
		if (!(xx > 0 || yy > 0)) {
			throw new FitProblem(
				'no-stated-uncertainty',
				'A line with deviations in both axes wants an uncertainty for every reading. State it in the columns.'
			);
		}
		const r = typeof correlation === 'number' ? correlation : correlation?.[i];
		if (r !== undefined) {
			if (!(Math.abs(r) < 1)) throw new FitProblem('not-finite', 'A correlation lies between −1 and 1.');
			xy = r * Math.sqrt(xx * yy);
		}
		return { xx, yy, xy };
	});
}

interface Towards {
	slope: number;
	height: number;
}

/**
 * How slope and height at the centre move with a deviation of one point, for deviations that points share: the exact
 * derivative of the minimum of sum w(b) (y - h - b x)^2 by its second derivatives, weights moving with the slope.
 */
export function bothAxesDerivatives(
	{ slope: b, centreX, w }: YorkLine,
	xs: readonly number[],
	residuals: readonly number[],
	spreads: readonly Spread[]
): (i: number) => { byX: Towards; byY: Towards } {
	// w = 1 / q(b): first and second derivative towards b
	const bends = spreads.map(({ xx, xy }, i) => {
		const weight = w[i] ?? 0;
		const first = 2 * b * xx - 2 * xy;
		return {
			once: -first * weight * weight,
			twice: 2 * first * first * weight * weight * weight - 2 * xx * weight * weight
		};
	});
	let [hh, hb, bb] = [0, 0, 0];
	bends.forEach(({ once, twice }, i) => {
		const [weight, r, x] = [w[i] ?? 0, residuals[i] ?? 0, (xs[i] ?? 0) - centreX];
		hh += 2 * weight;
		hb += 2 * weight * x - 2 * once * r;
		bb += twice * r * r - 4 * once * r * x + 2 * weight * x * x;
	});
	const determinant = hh * bb - hb * hb;
	const towards = (byHeight: number, bySlope: number): Towards => ({
		height: -(bb * byHeight - hb * bySlope) / determinant,
		slope: -(hh * bySlope - hb * byHeight) / determinant
	});
	return (i) => {
		const [weight, r, x] = [w[i] ?? 0, residuals[i] ?? 0, (xs[i] ?? 0) - centreX];
		const once = bends[i]?.once ?? 0;
		return {
			byX: towards(2 * weight * b, 2 * weight * b * x - 2 * weight * r - 2 * b * once * r),
			byY: towards(-2 * weight, 2 * once * r - 2 * weight * x)
		};
	};
}
