export type QuantityProblemCode =
	| 'unknown-unit'
	| 'ambiguous-unit'
	| 'unit-dimension'
	| 'dimension'
	| 'temperature-points'
	| 'domain'
	| 'covariance'
	| 'distribution'
	| 'not-finite';

/** Something that cannot be computed, said in words a student understands. The only error that this module throws. */
export class QuantityProblem extends Error {
	override readonly name = 'QuantityProblem';
	constructor(
		readonly code: QuantityProblemCode,
		message: string
	) {
		super(message);
	}
}
