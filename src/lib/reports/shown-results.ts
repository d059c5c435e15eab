import type { Evaluation } from '$lib/worksheets';
import { linkableValues } from './links';

/** A value as a page shows it; null stands for what JSON has no number for. */
export interface ShownResult {
	/** in `unit`, unrounded */
	value: number | null;
	unit: string;
	standardUncertainty: number | null;
	/** '41.6(6) kJ/mol' */
	text: string;
}

export interface ResultDifference {
	name: string;
	/** null: not there on this side */
	shown: ShownResult | null;
	computed: ShownResult | null;
}

/** Every value that a report can state, by name. Made alike in the browser and on the server, to the last bit. */
export function shownResults(evaluation: Evaluation): Record<string, ShownResult> {
	const number = (value: number | null): number | null =>
		value !== null && Number.isFinite(value) ? value : null;
	return Object.fromEntries(
		[...linkableValues(evaluation)].map(([name, quantity]) => [
			name,
			{
				value: number(quantity.value),
				unit: quantity.unit,
				standardUncertainty: number(quantity.standardUncertainty),
				text: quantity.display.text
			}
		])
	);
}

/** Names whose results differ in anything, in the order of names. Empty when both sides agree. */
export function compareResults(
	shown: Readonly<Record<string, ShownResult>>,
	computed: Readonly<Record<string, ShownResult>>
): ResultDifference[] {
	const of = (results: Readonly<Record<string, ShownResult>>, name: string) =>
		Object.hasOwn(results, name) ? (results[name] ?? null) : null;
	return [...new Set([...Object.keys(shown), ...Object.keys(computed)])]
		.sort()
		.map((name) => ({ name, shown: of(shown, name), computed: of(computed, name) }))
		.filter(({ shown: a, computed: b }) => a === null || b === null || !isSame(a, b));
}

function isSame(a: ShownResult, b: ShownResult): boolean {
	return (
		a.value === b.value &&
		a.unit === b.unit &&
		a.standardUncertainty === b.standardUncertainty &&
		a.text === b.text
	);
}
