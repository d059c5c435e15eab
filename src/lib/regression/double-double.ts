/**
 * Numbers as an unevaluated sum of two doubles, about 31 decimal digits (Dekker 1971; Knuth's two-sum). Residuals of an
 * ill-conditioned fit are computed in these, so that its solution can be refined to all digits that the data determine.
 */

/** A column of such numbers. */
export interface Wide {
	readonly high: Float64Array;
	readonly low: Float64Array;
}

export function wide(count: number): Wide {
	return { high: new Float64Array(count), low: new Float64Array(count) };
}

/** 2^27 + 1: splits a double into two halves whose products are exact. */
const splitter = 134_217_729;

/** A running value that sums and products are gathered in, without an object for each step. */
export class WideSum {
	high = 0;
	low = 0;

	set(high: number, low = 0): this {
		this.high = high;
		this.low = low;
		return this;
	}

	add(high: number, low = 0): this {
		const sum = this.high + high;
		const kept = sum - this.high;
		const lost = this.high - (sum - kept) + (high - kept) + this.low + low;
		this.high = sum + lost;
		this.low = lost - (this.high - sum);
		return this;
	}

	addProduct(aHigh: number, aLow: number, bHigh: number, bLow: number): this {
		const product = aHigh * bHigh;
		const aBig = splitter * aHigh;
		const a1 = aBig - (aBig - aHigh);
		const a2 = aHigh - a1;
		const bBig = splitter * bHigh;
		const b1 = bBig - (bBig - bHigh);
		const b2 = bHigh - b1;
		const lost = a1 * b1 - product + a1 * b2 + a2 * b1 + a2 * b2;
		return this.add(product, lost + (aHigh * bLow + aLow * bHigh));
	}

	/** Stores the value as the `i`-th of a column. */
	into(column: Wide, i: number): void {
		column.high[i] = this.high;
		column.low[i] = this.low;
	}
}
