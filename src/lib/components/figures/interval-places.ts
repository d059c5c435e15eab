import type { ShownComparison } from '$lib/worksheets';

/** px on a drawing 320 wide */
export interface Interval {
	low: number;
	middle: number;
	high: number;
}

const width = 320;
const inset = 12;

/**
 * Both values on one axis: the reference with twice its standard uncertainty, the measured value at its difference from
 * it with what then remains of the expanded uncertainty of the difference.
 */
export function intervalPlaces(
	comparison: Pick<ShownComparison, 'difference' | 'expanded95' | 'reference'>
): { measured: Interval; reference: Interval } {
	const reference = 2 * (comparison.reference.standardUncertainty ?? 0);
	const measured = Math.sqrt(Math.max(0, comparison.expanded95 ** 2 - reference ** 2));
	const difference = comparison.difference;
	const low = Math.min(-reference, difference - measured);
	const high = Math.max(reference, difference + measured);
	const span = high - low || 1;
	const place = (x: number) => inset + ((x - low) / span) * (width - 2 * inset);
	const interval = (middle: number, half: number): Interval => ({
		low: place(middle - half),
		middle: place(middle),
		high: place(middle + half)
	});
	return { measured: interval(difference, measured), reference: interval(0, reference) };
}
