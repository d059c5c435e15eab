export type FitProblemCode =
	'too-few-points' | 'no-spread' | 'no-stated-uncertainty' | 'not-finite' | 'singular' | 'no-convergence';

/** Parameters that the points do not determine, in words a student understands. */
export class FitProblem extends Error {
	override readonly name = 'FitProblem';
	constructor(
		readonly code: FitProblemCode,
		message: string
	) {
		super(message);
	}
}

/** @throws FitProblem 'too-few-points' */
export function requirePoints(points: number, parameters: number, policy: 'scatter' | 'stated'): void {
	const wanted = policy === 'scatter' ? parameters + 1 : parameters;
	if (points >= wanted) return;
	if (points === 0) throw new FitProblem('too-few-points', 'No points yet.');
	const missing = wanted - points;
	const have = points === 1 ? 'One point does' : `${points} points do`;
	throw new FitProblem(
		'too-few-points',
		points === parameters
			? `${points === 1 ? 'One point leaves' : `${points} points leave`} no scatter about ${parameters === 1 ? 'one parameter' : `${parameters} parameters`}. Add one.`
			: `${have} not determine ${parameters} parameters. Add ${missing === 1 ? 'one' : missing}.`
	);
}

export function outOfRange(): FitProblem {
	return new FitProblem('not-finite', 'Some point lies so far out that nothing can be fitted. Look for it.');
}

export function singular(): FitProblem {
	return new FitProblem(
		'singular',
		'The points do not tell these parameters apart: one can make up for another. Fix one of them, or vary what was held constant.'
	);
}
