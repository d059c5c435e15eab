import { unitTex, type Unit } from '$lib/quantities';

/** A number with its unit for a sample calculation: seven digits, a power of ten where it is far from one. */
export function numberTex(value: number, unit: Unit): string {
	const [digits = '0', exponent = '0'] = value.toExponential(6).split('e');
	const power = Number(exponent);
	const text =
		power >= -2 && power <= 5 ? String(Number(value.toPrecision(8))) : `${digits}\\times 10^{${power}}`;
	const unitPart = unitTex(unit);
	return unitPart === '' ? text : `${text}~${unitPart}`;
}
