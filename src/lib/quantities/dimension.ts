/** Exponents of metre, kilogram, second, ampere, kelvin, mole, candela. */
export type Dimension = readonly [number, number, number, number, number, number, number];

const baseUnits = ['m', 'kg', 's', 'A', 'K', 'mol', 'cd'] as const;

export const dimensionless: Dimension = [0, 0, 0, 0, 0, 0, 0];

export function multiplyDimensions(a: Dimension, b: Dimension): Dimension {
	return [a[0] + b[0], a[1] + b[1], a[2] + b[2], a[3] + b[3], a[4] + b[4], a[5] + b[5], a[6] + b[6]];
}

export function divideDimensions(a: Dimension, b: Dimension): Dimension {
	return [a[0] - b[0], a[1] - b[1], a[2] - b[2], a[3] - b[3], a[4] - b[4], a[5] - b[5], a[6] - b[6]];
}

export function raiseDimension(a: Dimension, exponent: number): Dimension {
	const raise = (n: number) => {
		const raised = n * exponent;
		const whole = Math.round(raised);
		// thirds of a cube come back whole; + 0 turns -0 into 0, which would show up when dimensions are compared as JSON
		return (Math.abs(raised - whole) < 1e-9 ? whole : raised) + 0;
	};
	return [raise(a[0]), raise(a[1]), raise(a[2]), raise(a[3]), raise(a[4]), raise(a[5]), raise(a[6])];
}

export function sameDimension(a: Dimension, b: Dimension): boolean {
	if (a === b) return true;
	// a plain loop: this is asked several times for every cell of every row
	for (let i = 0; i < a.length; i += 1) if (a[i] !== b[i]) return false;
	return true;
}

export function isDimensionless(a: Dimension): boolean {
	return sameDimension(a, dimensionless);
}

const named: readonly [string, Dimension][] = [
	['number', dimensionless],
	['length', [1, 0, 0, 0, 0, 0, 0]],
	['area', [2, 0, 0, 0, 0, 0, 0]],
	['volume', [3, 0, 0, 0, 0, 0, 0]],
	['mass', [0, 1, 0, 0, 0, 0, 0]],
	['time', [0, 0, 1, 0, 0, 0, 0]],
	['electric current', [0, 0, 0, 1, 0, 0, 0]],
	['temperature', [0, 0, 0, 0, 1, 0, 0]],
	['amount of substance', [0, 0, 0, 0, 0, 1, 0]],
	['pressure', [-1, 1, -2, 0, 0, 0, 0]],
	['energy', [2, 1, -2, 0, 0, 0, 0]],
	['molar energy', [2, 1, -2, 0, 0, -1, 0]],
	['molar heat capacity', [2, 1, -2, 0, -1, -1, 0]],
	['heat capacity', [2, 1, -2, 0, -1, 0, 0]],
	['reciprocal temperature', [0, 0, 0, 0, -1, 0, 0]],
	['density', [-3, 1, 0, 0, 0, 0, 0]],
	['acceleration', [1, 0, -2, 0, 0, 0, 0]],
	['concentration', [-3, 0, 0, 0, 0, 1, 0]],
	['molar mass', [0, 1, 0, 0, 0, -1, 0]],
	['rate constant', [0, 0, -1, 0, 0, 0, 0]],
	['second-order rate constant', [3, 0, -1, 0, 0, -1, 0]],
	['molar volume', [3, 0, 0, 0, 0, -1, 0]],
	['energy per mass', [2, 0, -2, 0, 0, 0, 0]],
	['heat capacity per mass', [2, 0, -2, 0, -1, 0, 0]],
	['reciprocal length', [-1, 0, 0, 0, 0, 0, 0]],
	['specific rotation', [2, -1, 0, 0, 0, 0, 0]],
	['force', [1, 1, -2, 0, 0, 0, 0]],
	['power', [2, 1, -3, 0, 0, 0, 0]],
	['rate of heating', [0, 0, -1, 0, 1, 0, 0]],
	['electric charge', [0, 0, 1, 1, 0, 0, 0]],
	['electric resistance', [2, 1, -3, -2, 0, 0, 0]],
	['electric conductance', [-2, -1, 3, 2, 0, 0, 0]],
	['capacitance', [-2, -1, 4, 2, 0, 0, 0]],
	['voltage', [2, 1, -3, -1, 0, 0, 0]]
];

/** What the dimension is called, 'pressure' say; where there is no usual name, its base units. */
export function nameDimension(dimension: Dimension): string {
	const known = named.find(([, candidate]) => sameDimension(candidate, dimension));
	if (known) return known[0];
	const factors = baseUnits.flatMap((unit, i) => {
		const exponent = dimension[i] ?? 0;
		return exponent === 0 ? [] : [exponent === 1 ? unit : `${unit}^${exponent}`];
	});
	return `quantity in ${factors.join(' ')}`;
}

/** The same with its article: 'a pressure', 'an energy'. */
export function nameDimensionWithArticle(dimension: Dimension): string {
	const name = nameDimension(dimension);
	return `${/^[aeiou]/.test(name) ? 'an' : 'a'} ${name}`;
}
