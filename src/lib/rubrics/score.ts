import { divideHalfEven, fromHundredths, toHundredths } from './exact';
import type { Rubric, RubricCriterion, Score, Total } from './types';

/** The most a criterion gives. */
export function criterionMaximum(criterion: RubricCriterion): number {
	return fromHundredths(maximumHundredths(criterion));
}

/** The most a rubric gives. */
export function maximum(rubric: Rubric): number {
	return fromHundredths(rubric.criteria.reduce((sum, criterion) => sum + maximumHundredths(criterion), 0));
}

/**
 * Sum of the points of a rubric's criteria. Criteria without a score are named in `missing` and count nothing;
 * scores of other criteria are not looked at.
 *
 * @throws RangeError when points have more than two decimals or lie outside 0 to the criterion's maximum
 */
export function total(rubric: Rubric, scores: Readonly<Record<string, Score | null | undefined>>): Total {
	let sum = 0;
	const missing: string[] = [];
	for (const criterion of rubric.criteria) {
		const score = Object.hasOwn(scores, criterion.key) ? scores[criterion.key] : null;
		if (!score) {
			missing.push(criterion.key);
			continue;
		}
		const points = toHundredths(score.points, criterion.title);
		if (points < 0 || points > maximumHundredths(criterion)) {
			throw new RangeError(
				`${criterion.title}: ${score.points} is outside 0 to ${criterionMaximum(criterion)}`
			);
		}
		sum += points;
	}
	return { points: fromHundredths(sum), maximum: maximum(rubric), missing, complete: missing.length === 0 };
}

/** The score that choosing a level gives, null when the criterion has no such level. */
export function scoreOfLevel(criterion: RubricCriterion, level: number): Score | null {
	const found = criterion.levels.find((candidate) => candidate.level === level);
	return found ? { level, points: found.points } : null;
}

/** A rubric as an experiment gives it: weights instead of points. */
export interface WeightedRubric {
	title: string;
	criteria: {
		key: string;
		title: string;
		asks: string;
		weight: number;
		levels: { level: number; title: string; text: string }[];
	}[];
}

/**
 * Points from weights. `points` is shared over the criteria by weight in whole points where `points` is whole (what is
 * left over goes to the largest remainders, the earlier criterion first), so that the maxima sum to `points` exactly.
 * Levels divide a criterion's points evenly: the lowest gives 0, the highest all, halves of a hundredth to even.
 *
 * @throws RangeError when no weight is positive or `points` has more than two decimals
 */
export function pointsFromWeights(key: string, rubric: WeightedRubric, points: number): Rubric {
	const unit = Number.isInteger(points) ? 100 : 1;
	const shares = share(
		toHundredths(points, rubric.title) / unit,
		rubric.criteria.map((criterion) => criterion.weight)
	);
	return {
		key,
		title: rubric.title,
		criteria: rubric.criteria.map((criterion, index) => {
			const most = (shares[index] ?? 0) * unit;
			const steps = criterion.levels.length - 1;
			return {
				key: criterion.key,
				title: criterion.title,
				asks: criterion.asks,
				levels: criterion.levels.map(({ level, title, text }, order) => ({
					level,
					title,
					text,
					points: fromHundredths(steps <= 0 ? most : divideHalfEven(most * order, steps))
				}))
			};
		})
	};
}

function share(whole: number, weights: number[]): number[] {
	const sum = weights.reduce((all, weight) => all + weight, 0);
	if (!(sum > 0) || weights.some((weight) => !(weight >= 0)))
		throw new RangeError('Weights have to be positive');
	const exact = weights.map((weight) => (whole * weight) / sum);
	const shares = exact.map(Math.floor);
	const order = exact
		.map((value, index) => ({ index, rest: value - Math.floor(value) }))
		.sort((a, b) => b.rest - a.rest || a.index - b.index);
	let left = whole - shares.reduce((all, value) => all + value, 0);
	for (const { index } of order) {
		if (left <= 0) break;
		shares[index] = (shares[index] ?? 0) + 1;
		left -= 1;
	}
	return shares;
}

function maximumHundredths(criterion: RubricCriterion): number {
	return criterion.levels.reduce(
		(most, level) => Math.max(most, toHundredths(level.points, criterion.title)),
		0
	);
}
