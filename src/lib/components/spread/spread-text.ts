/** Groups smaller than this are told as such. */
export const smallGroup = 5;

export const isSmall = (n: number): boolean => n > 0 && n < smallGroup;

/** A statistic to two decimals at most, '–' where there is none. Rounded for display only. */
export function shownNumber(value: number | null): string {
	if (value === null || !Number.isFinite(value)) return '–';
	return String(Math.round(value * 100) / 100).replace('-', '\u2212');
}
