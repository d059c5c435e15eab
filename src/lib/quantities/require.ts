import {
	isDimensionless,
	nameDimension,
	nameDimensionWithArticle,
	sameDimension,
	type Dimension
} from './dimension';
import { QuantityProblem } from './problems';
import type { Quantity } from './quantity';

const temperature: Dimension = [0, 0, 0, 0, 1, 0, 0];

/** @throws QuantityProblem that names both kinds: 'A pressure and a temperature cannot be added.' */
export function requireSame(a: Quantity, b: Quantity, verb: string): void {
	if (sameDimension(a.dimension, b.dimension)) return;
	throw new QuantityProblem(
		'dimension',
		`${capitalise(nameDimensionWithArticle(a.dimension))} and ${nameDimensionWithArticle(b.dimension)} cannot be ${verb}.`
	);
}

/** `what` opens the sentence: 'A logarithm', 'A sine'. */
export function requireNumber(a: Quantity, what: string, wanted = 'a number without unit'): void {
	if (isDimensionless(a.dimension)) return;
	throw new QuantityProblem(
		'dimension',
		`${what} wants ${wanted}; this is ${nameDimensionWithArticle(a.dimension)}. Divide the ${nameDimension(a.dimension)} by a unit first.`
	);
}

export function requireTemperature(a: Quantity): void {
	if (isTemperature(a)) return;
	throw new QuantityProblem(
		'dimension',
		`Temperature wanted; this is ${nameDimensionWithArticle(a.dimension)}.`
	);
}

export function isTemperature(a: Quantity): boolean {
	return sameDimension(a.dimension, temperature);
}

export function capitalise(words: string): string {
	return words.charAt(0).toUpperCase() + words.slice(1);
}
