import {
	absolute,
	arccosine,
	arcsine,
	arctangent,
	cosine,
	exp,
	ln,
	log10,
	maximum,
	minimum,
	QuantityProblem,
	sine,
	squareRoot,
	tangent,
	thermodynamicTemperature,
	uncertaintyOf,
	type Quantity
} from '$lib/quantities';

interface ValueFunction {
	/** fewest and most arguments */
	least: number;
	most: number;
	of(values: readonly Quantity[]): Quantity;
}

function single(compute: (a: Quantity) => Quantity): ValueFunction {
	return {
		least: 1,
		most: 1,
		of: ([a]) => {
			if (!a) throw new QuantityProblem('domain', 'A function without its argument.');
			return compute(a);
		}
	};
}

/** What a formula may call on single values. `kelvin` turns a Celsius temperature into a thermodynamic one. */
export const valueFunctions: Readonly<Record<string, ValueFunction>> = {
	ln: single(ln),
	log10: single(log10),
	exp: single(exp),
	sqrt: single(squareRoot),
	abs: single(absolute),
	sin: single(sine),
	cos: single(cosine),
	tan: single(tangent),
	asin: single(arcsine),
	acos: single(arccosine),
	atan: single(arctangent),
	kelvin: single(thermodynamicTemperature),
	u: single(uncertaintyOf),
	min: { least: 2, most: 9, of: minimum },
	max: { least: 2, most: 9, of: maximum }
};

interface ColumnFunction {
	/** arguments worked out in every row */
	columns: number;
	/** arguments worked out once, where the formula stands */
	places: number;
	/** takes the formula's policy */
	averages: boolean;
}

/** What a formula may call on columns; `aggregates.ts` computes them. */
export const columnFunctions: Readonly<Record<string, ColumnFunction>> = {
	mean: { columns: 1, places: 0, averages: true },
	weighted_mean: { columns: 1, places: 0, averages: true },
	sum: { columns: 1, places: 0, averages: false },
	min: { columns: 1, places: 0, averages: false },
	max: { columns: 1, places: 0, averages: false },
	count: { columns: 1, places: 0, averages: false },
	s: { columns: 1, places: 0, averages: false },
	initial: { columns: 1, places: 0, averages: false },
	final: { columns: 1, places: 0, averages: false },
	integral: { columns: 2, places: 2, averages: false },
	interpolate: { columns: 2, places: 1, averages: false }
};
