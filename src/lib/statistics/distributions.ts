export interface Bin {
	/** inclusive */
	from: number;
	/** exclusive, but for the last bin */
	to: number;
	count: number;
}

/** Counts values between ascending edges; the last bin includes its upper edge. Values outside are counted in none. */
export function histogram(values: readonly number[], edges: readonly number[]): Bin[] {
	const bins: Bin[] = edges.slice(1).map((to, i) => ({ from: edges[i] ?? to, to, count: 0 }));
	const last = bins.length - 1;
	for (const value of values) {
		const at = bins.findIndex(
			(bin, i) => value >= bin.from && (value < bin.to || (i === last && value === bin.to))
		);
		const bin = bins[at];
		if (bin) bin.count += 1;
	}
	return bins;
}

/**
 * Equal bins of a round width (1, 2, 2.5 or 5 times a power of ten) that cover all values, about `wanted` of them.
 * A few more or fewer come out; one value, or none spread, gives one bin around it.
 */
export function roundEdges(values: readonly number[], wanted: number): number[] {
	if (values.length === 0) return [];
	const low = Math.min(...values);
	const high = Math.max(...values);
	if (low === high) return [low - 0.5, low + 0.5];
	const raw = (high - low) / Math.max(1, wanted);
	const power = Number(`1${raw.toExponential(0).slice(1)}`);
	const width = power * ([1, 2, 2.5, 5, 10].find((step) => step * power >= raw) ?? 10);
	const first = Math.floor(low / width);
	const count = Math.max(1, Math.ceil(high / width) - first);
	return Array.from({ length: count + 1 }, (_, i) => (first + i) * width);
}

/** Steps of the empirical distribution function: ascending distinct values with the share at or below each. */
export function empiricalDistribution(values: readonly number[]): { value: number; share: number }[] {
	const sorted = [...values].sort((a, b) => a - b);
	const steps: { value: number; share: number }[] = [];
	sorted.forEach((value, i) => {
		const step = { value, share: (i + 1) / sorted.length };
		if (steps.at(-1)?.value === value) steps[steps.length - 1] = step;
		else steps.push(step);
	});
	return steps;
}
