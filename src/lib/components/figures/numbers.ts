/** Two significant digits, as uncertainties are quoted; true minus; powers of ten only where zeros would mislead. */
export function contributionText(value: number): string {
	if (value === 0) return '0';
	if (!Number.isFinite(value)) return '–';
	const [mantissa = '0', power = '0'] = Math.abs(value).toExponential(1).split('e');
	const exponent = Number(power);
	const sign = value < 0 ? '\u2212' : '';
	if (exponent < -4 || exponent > 5) return `${sign}${mantissa}e${String(exponent).replace('-', '\u2212')}`;
	const rounded = Number(`${mantissa}e${power}`);
	return `${sign}${rounded.toFixed(Math.max(0, 1 - exponent))}`;
}

/** A share of one as per cent with one decimal. */
export function percentText(share: number): string {
	return (share * 100).toFixed(1).replace('-', '\u2212');
}
