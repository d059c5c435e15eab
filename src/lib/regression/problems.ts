export type FitProblemCode = 'too-few-points' | 'no-spread' | 'no-stated-uncertainty' | 'not-finite';

/** A line that the points do not determine, in words a student understands. */
export class FitProblem extends Error {
	override readonly name = 'FitProblem';
	constructor(
		readonly code: FitProblemCode,
		message: string
	) {
		super(message);
	}
}
