import { descend, squares, type Objective, type Slopes } from './descent';
import { Orthogonal } from './orthogonal';
import { FitProblem, singular } from './problems';

export interface Minimum {
	readonly parameters: readonly number[];
	readonly factored: Orthogonal;
	readonly residuals: Float64Array;
	readonly columns: readonly Float64Array[];
	readonly iterations: number;
}

const mostPolishing = 100;
/** First dampings, each tried from the start until one ends at a minimum: bold, cautious, very cautious, all but free. */
const dampings = [1e-3, 1, 1e3, 1e-8];
/** A parameter of whose whole size the fit feels less than this share of y is not determined. */
const leastEffect = 1e-10;

/**
 * Least squares of a model that is not linear in its parameters: a damped descent, then undamped steps until rounding
 * stops them. All loops are bounded.
 * @throws FitProblem 'singular', 'no-convergence', 'not-finite'
 */
export function minimise(objective: Objective, start: readonly number[]): Minimum {
	if (!objective.residuals(start)) {
		throw new FitProblem(
			'not-finite',
			'The formula has no value at the starting values for some point. Start elsewhere.'
		);
	}
	let iterations = 0;
	let problem = notConverged();
	for (const damping of dampings) {
		const reached = descend(objective, start, damping);
		iterations += reached.iterations;
		if (!reached.settled) continue;
		try {
			const polished = polish(objective, reached.parameters, start);
			return { ...polished, iterations: iterations + polished.iterations };
		} catch (cause) {
			if (!(cause instanceof FitProblem)) throw cause;
			problem = cause;
		}
	}
	throw problem;
}

function notConverged(): FitProblem {
	return new FitProblem(
		'no-convergence',
		'No best parameters were found from these starting values. Start nearer, from a sketch or from the line.'
	);
}

/** Undamped steps while each at least halves what is left to explain: to the last digits that rounding leaves. */
function polish(objective: Objective, reached: readonly number[], start: readonly number[]): Minimum {
	let best = factor(objective, reached, start);
	let iterations = 0;
	for (; iterations < mostPolishing; iterations += 1) {
		const { next, left } = best;
		const trial = left > 0 ? factorOrNull(objective, next, start) : null;
		if (!trial || !(trial.left < 0.9 * left)) break;
		best = trial;
	}
	const { parameters, factored, slopes } = best;
	return { parameters, factored, ...slopes, iterations };
}

interface Factored {
	parameters: readonly number[];
	factored: Orthogonal;
	slopes: Slopes;
	/** length of the explained part of the residuals */
	left: number;
	/** where an undamped step leads */
	next: readonly number[];
}

function factorOrNull(
	objective: Objective,
	parameters: readonly number[],
	start: readonly number[]
): Factored | null {
	try {
		return factor(objective, parameters, start);
	} catch (cause) {
		if (cause instanceof FitProblem) return null;
		throw cause;
	}
}

function factor(objective: Objective, parameters: readonly number[], start: readonly number[]): Factored {
	const slopes = objective.slopes(parameters);
	if (!slopes) throw notConverged();
	slopes.columns.forEach((column, j) => {
		const whole = Math.max(Math.abs(parameters[j] ?? 0), Math.abs(start[j] ?? 0)) || 1;
		if (!(Math.sqrt(squares(column)) * whole > leastEffect * objective.size)) throw singular();
	});
	const factored = new Orthogonal(slopes.columns, slopes.residuals.length);
	const step = Float64Array.from(slopes.residuals);
	factored.rotate(step);
	const count = parameters.length;
	const left = Math.sqrt(squares(step.subarray(0, count)));
	factored.solve(step);
	return {
		parameters,
		factored,
		slopes,
		left,
		next: parameters.map((value, j) => value + (step[j] ?? 0))
	};
}
