import { fAbove } from './probability';
import { compensatedSum, mean, squaresAboutMean } from './summaries';

export interface Anova {
	readonly between: { readonly squares: number; readonly degreesOfFreedom: number; readonly meanSquare: number }; // prettier-ignore
	readonly within: { readonly squares: number; readonly degreesOfFreedom: number; readonly meanSquare: number }; // prettier-ignore
	readonly f: number;
	/** probability of an F as large, were all groups' means the same */
	readonly p: number;
	/** share of the whole scatter that lies between groups */
	readonly rSquared: number;
	/** standard deviation within groups */
	readonly standardDeviation: number;
	/**
	 * standard deviation of the groups' true means, by the mean squares; 0 where the means scatter less than their
	 * groups explain
	 */
	readonly betweenDeviation: number;
}

/**
 * One-way analysis of variance over groups of any sizes. Where numbers share leading digits, give their differences
 * from one of them (`deviationsOfTyped`): nothing here depends on the origin. Null below two groups or where no degree
 * of freedom is left within.
 */
export function analyseVariance(groups: readonly (readonly number[])[]): Anova | null {
	const filled = groups.filter((group) => group.length > 0);
	const n = filled.reduce((sum, group) => sum + group.length, 0);
	const [dfBetween, dfWithin] = [filled.length - 1, n - filled.length];
	if (dfBetween < 1 || dfWithin < 1) return null;
	const grand = mean(filled.flat());
	const offsets = filled.map((group) => mean(group.map((value) => value - grand)));
	// what rounding left in the grand mean drops out of the sum
	const left = compensatedSum(offsets.map((offset, i) => offset * (filled[i]?.length ?? 0)));
	const between =
		compensatedSum(offsets.map((offset, i) => offset * offset * (filled[i]?.length ?? 0))) -
		(left * left) / n;
	const within = compensatedSum(filled.map(squaresAboutMean));
	const [msBetween, msWithin] = [between / dfBetween, within / dfWithin];
	const f = msBetween / msWithin;
	const sizes = compensatedSum(filled.map((group) => group.length * group.length)) / n;
	const size = (n - sizes) / dfBetween;
	return {
		between: { squares: between, degreesOfFreedom: dfBetween, meanSquare: msBetween },
		within: { squares: within, degreesOfFreedom: dfWithin, meanSquare: msWithin },
		f,
		p: fAbove(f, dfBetween, dfWithin),
		rSquared: between / (between + within),
		standardDeviation: Math.sqrt(msWithin),
		betweenDeviation: Math.sqrt(Math.max(0, (msBetween - msWithin) / size))
	};
}
