/**
 * Points are counted in hundredths, percentages in hundredths of a percent: whole numbers, so that sums come out
 * the same in any order. Where a hundredth has to be cut, halves go to the even neighbour (IEEE 754
 * roundTiesToEven), which favours neither side over many reports.
 */
export function toHundredths(value: number, what: string): number {
	const scaled = value * 100;
	const whole = Math.round(scaled);
	// 0.07 * 100 is 7.000000000000001: decimal input, not a third decimal.
	if (!Number.isSafeInteger(whole) || Math.abs(scaled - whole) > 1e-6) {
		throw new RangeError(`${what}: ${value} has more than two decimals or is out of range`);
	}
	return whole;
}

export function fromHundredths(hundredths: number): number {
	return hundredths / 100;
}

/** `numerator / denominator` to the nearest whole number, halves to even. Whole numbers; the denominator is positive. */
export function divideHalfEven(numerator: number, denominator: number): number {
	const floor = Math.floor(numerator / denominator);
	const twice = 2 * (numerator - floor * denominator);
	if (twice !== denominator) return twice > denominator ? floor + 1 : floor;
	return floor % 2 === 0 ? floor : floor + 1;
}
