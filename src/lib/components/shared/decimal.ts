/** A number's text cut before its decimal marker, so that a column lines up on the marker. */
export interface DecimalParts {
	/** "−12" of "−12.30(4)" */
	whole: string;
	/** ".30(4)"; empty when there is no marker */
	fraction: string;
}

/**
 * Cuts at the first point or comma that stands between digits (or leads them). Text that is no number stays whole:
 * it is shown as typed.
 */
export function splitDecimal(text: string): DecimalParts {
	const number = /^(\s*[+\-\u2212]?\d*)([.,]\d.*)$/u.exec(text);
	if (number === null) return { whole: text, fraction: '' };
	return { whole: number[1] ?? '', fraction: number[2] ?? '' };
}

/** Characters that the widest fraction of a column takes, the marker and an uncertainty in brackets included. */
export function fractionWidth(texts: Iterable<string>): number {
	let widest = 0;
	for (const text of texts) widest = Math.max(widest, [...splitDecimal(text).fraction].length);
	return widest;
}
