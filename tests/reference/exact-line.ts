/**
 * Least squares in exact rational arithmetic over the very doubles given: a second way to a line's parameters that
 * shares nothing with the code under test, not even rounding.
 */

interface Fraction {
	numerator: bigint;
	denominator: bigint;
}

/** A double as numerator over a power of two, without loss. */
export function fractionOf(value: number): Fraction {
	const bytes = new DataView(new ArrayBuffer(8));
	bytes.setFloat64(0, value);
	const bits = bytes.getBigUint64(0);
	const exponent = Number((bits >> 52n) & 0x7ffn);
	const fraction = bits & 0xfffffffffffffn;
	const significand =
		(exponent === 0 ? fraction : fraction | 0x10000000000000n) * (bits >> 63n === 1n ? -1n : 1n);
	const power = (exponent === 0 ? 1 : exponent) - 1075;
	return power >= 0
		? { numerator: significand << BigInt(power), denominator: 1n }
		: { numerator: significand, denominator: 1n << BigInt(-power) };
}

/** The nearest double, by way of 40 decimal digits. */
function toNumber({ numerator, denominator }: Fraction): number {
	const negative = numerator < 0n !== denominator < 0n;
	const [a, b] = [numerator < 0n ? -numerator : numerator, denominator < 0n ? -denominator : denominator];
	if (a === 0n) return 0;
	const shift = 40 - (String(a).length - String(b).length);
	const digits = shift >= 0 ? (a * 10n ** BigInt(shift)) / b : a / (b * 10n ** BigInt(-shift));
	return Number(`${negative ? '-' : ''}${digits}e${-shift}`);
}

/** All values over one denominator. */
function common(values: readonly number[]): { integers: bigint[]; scale: bigint } {
	const fractions = values.map(fractionOf);
	const scale = fractions.reduce((most, { denominator }) => (denominator > most ? denominator : most), 1n);
	return {
		integers: fractions.map(({ numerator, denominator }) => numerator * (scale / denominator)),
		scale
	};
}

export interface ExactLine {
	slope: number;
	intercept: number;
	/** of the residuals, n - 2 degrees of freedom */
	residualVariance: number;
	/** of the slope and the intercept, from the residual variance */
	slopeVariance: number;
	interceptVariance: number;
}

export function exactLine(xs: readonly number[], ys: readonly number[]): ExactLine {
	const { integers: x, scale: scaleX } = common(xs);
	const { integers: y, scale: scaleY } = common(ys);
	const n = BigInt(x.length);
	const total = (f: (i: number) => bigint) => x.reduce((sum, _, i) => sum + f(i), 0n);
	const at = (list: bigint[], i: number) => list[i] ?? 0n;
	const sx = total((i) => at(x, i));
	const sy = total((i) => at(y, i));
	const sxx = total((i) => at(x, i) * at(x, i));
	const sxy = total((i) => at(x, i) * at(y, i));
	const syy = total((i) => at(y, i) * at(y, i));
	const dx = n * sxx - sx * sx;
	const dxy = n * sxy - sx * sy;
	const dy = n * syy - sy * sy;
	// residual sum of squares = (dy - dxy^2 / dx) / n, in units of scaleY^2
	const residual: Fraction = {
		numerator: dy * dx - dxy * dxy,
		denominator: n * dx * (n - 2n) * scaleY * scaleY
	};
	const scaled = (numerator: bigint, denominator: bigint): Fraction => ({
		numerator: residual.numerator * numerator,
		denominator: residual.denominator * denominator
	});
	return {
		slope: toNumber({ numerator: dxy * scaleX, denominator: dx * scaleY }),
		intercept: toNumber({ numerator: sy * dx - dxy * sx, denominator: n * dx * scaleY }),
		residualVariance: toNumber(residual),
		slopeVariance: toNumber(scaled(n * scaleX * scaleX, dx)),
		interceptVariance: toNumber(scaled(sxx, dx))
	};
}
