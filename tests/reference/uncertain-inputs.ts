import {
	exactly,
	parseUnit,
	withDeviations,
	type Component,
	type Quantity,
	type Source
} from '$lib/quantities';

/** One input of a worked example, told in `unit`, with its own component. */
export function input(
	value: number,
	u: number,
	{ unit = '1', label = 'input', degreesOfFreedom = Infinity } = {}
): Quantity {
	return withComponents(value, [[label, u, degreesOfFreedom]], unit);
}

/** The same with several components: label, standard uncertainty in the unit, degrees of freedom. */
export function withComponents(
	value: number,
	components: readonly (readonly [string, number, number?])[],
	unit = '1'
): Quantity {
	const told = parseUnit(unit);
	return withDeviations(
		exactly(value, told),
		components.map(([label, u, degreesOfFreedom = Infinity]) => {
			const component: Component = { id: label, label, scope: 'instrument', degreesOfFreedom };
			const source: Source = { component };
			return [source, u * told.factor] as const;
		})
	);
}

export function rectangular(halfWidth: number): number {
	return halfWidth / Math.sqrt(3);
}

export function triangular(halfWidth: number): number {
	return halfWidth / Math.sqrt(6);
}

/** How many units of `digit` two numbers differ by: 0.5 is rounding. */
export function inUnitsOf(digit: number, a: number, b: number): number {
	return Math.abs(a - b) / digit;
}
