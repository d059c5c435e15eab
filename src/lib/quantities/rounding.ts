/** A value cut to its digits: value = mantissa * 10^exponent, the uncertainty in units of the last digit shown. */
export interface RoundedNumber {
	/** with a plain hyphen as minus: '41.60' */
	mantissa: string;
	exponent: number;
	/** '25' for (25) in the last digits; null without uncertainty */
	inLastDigits: string | null;
	/** the uncertainty on the mantissa's scale: '0.25' */
	uncertainty: string | null;
}

/** Digits shown of a value whose uncertainty is not stated: enough to compute on, few enough to read. */
const digitsWithoutUncertainty = 6;

/** Decimal digits that a binary double carries. */
const mostDigits = 15;

/**
 * Rounds to the uncertainty (GUM 7.2.6: one or two digits). Two where the first digit is 1 or 2, one elsewhere
 * (common practice), so that rounding never changes the uncertainty by more than a sixth.
 */
export function roundToUncertainty(value: number, standardUncertainty: number | null): RoundedNumber {
	const u = standardUncertainty;
	if (u === null || !(u > 0) || !Number.isFinite(u)) return roundToDigits(value, digitsWithoutUncertainty);
	const digits = significantDigits(u);
	const lastPlace = placeOfFirstDigit(Number(u.toPrecision(digits))) - digits + 1;
	const size = Math.max(placeOfFirstDigit(value), placeOfFirstDigit(u));
	// an uncertainty below the last bit of the value cannot be shown in its digits
	if (size - lastPlace > mostDigits) return roundToDigits(value, mostDigits);
	// A power of ten where the last digit shown would be left of the decimal sign, or the value is tiny or huge.
	const exponent = lastPlace > 0 || size < -3 || size > 5 ? size : 0;
	const decimals = Math.max(0, exponent - lastPlace);
	const uncertainty = scaleByTen(u, -exponent).toFixed(decimals);
	return {
		mantissa: dropNegativeZero(scaleByTen(value, -exponent).toFixed(decimals)),
		exponent,
		inLastDigits: uncertainty.replace('.', '').replace(/^0+(?=\d)/, ''),
		uncertainty
	};
}

function significantDigits(u: number): 1 | 2 {
	const first = u.toExponential(1).charAt(0);
	return first === '1' || first === '2' ? 2 : 1;
}

/** Shortest form of at most `digits` significant digits, zeros at the end dropped. */
export function roundToDigits(value: number, digits: number): RoundedNumber {
	const rounded = Number(value.toPrecision(digits));
	const size = placeOfFirstDigit(rounded);
	const exponent = rounded !== 0 && (size < -3 || size > Math.max(5, digits - 1)) ? size : 0;
	const decimals = Math.max(0, digits - 1 - (size - exponent));
	const fixed = scaleByTen(rounded, -exponent).toFixed(Math.min(decimals, 100));
	const mantissa = fixed.includes('.') ? fixed.replace(/0+$/, '').replace(/\.$/, '') : fixed;
	return { mantissa: dropNegativeZero(mantissa), exponent, inLastDigits: null, uncertainty: null };
}

/** Power of ten of the first digit: 1 for 41.6, -3 for 0.0025; 0 for zero. */
export function placeOfFirstDigit(value: number): number {
	return value === 0 ? 0 : Number(value.toExponential(15).split('e')[1] ?? '0');
}

/** value * 10^power with a single rounding, by way of the decimal text. */
function scaleByTen(value: number, power: number): number {
	if (power === 0) return value;
	const [digits = '0', exponent = '0'] = value.toExponential().split('e');
	return Number(`${digits}e${Number(exponent) + power}`);
}

function dropNegativeZero(text: string): string {
	return /^-0(?:\.0*)?$/.test(text) ? text.slice(1) : text;
}
