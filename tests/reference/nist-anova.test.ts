import { readFileSync } from 'node:fs';
import { afterAll, describe, expect, it } from 'vitest';
import { analyseVariance, deviationsOfTyped, type Anova } from '$lib/statistics';
import { digits, nistSets, Worst } from './nist';

interface AnovaSet {
	between: { df: string; ss: string; ms: string; f: string };
	within: { df: string; ss: string; ms: string };
	r_squared: string;
	residual_sd: string;
	groups: Record<string, string | { first: string; then: string[]; times: number }>;
}

const sets = nistSets<AnovaSet>('anova');
const worst = new Worst();

function groupsOf(set: AnovaSet): string[][] {
	return Object.values(set.groups).map((group) =>
		typeof group === 'string'
			? group.split(' ')
			: [group.first, ...Array.from({ length: group.times }, () => group.then).flat()]
	);
}

function leastDigits(analysis: Anova | null, set: AnovaSet): number {
	if (!analysis) return NaN;
	expect(analysis.between.degreesOfFreedom).toBe(Number(set.between.df));
	expect(analysis.within.degreesOfFreedom).toBe(Number(set.within.df));
	return Math.min(
		digits(analysis.between.squares, set.between.ss),
		digits(analysis.between.meanSquare, set.between.ms),
		digits(analysis.within.squares, set.within.ss),
		digits(analysis.within.meanSquare, set.within.ms),
		digits(analysis.f, set.between.f),
		digits(analysis.rSquared, set.r_squared),
		digits(analysis.standardDeviation, set.residual_sd)
	);
}

/** Numbers with 7 leading digits in common keep about 9 digits of their differences in doubles, with 13 about 3. */
const digitsOfDoubles: Record<string, number> = {
	AtmWtAg: 8,
	SmLs04: 8,
	SmLs05: 8,
	SmLs06: 8,
	SmLs07: 2,
	SmLs08: 2,
	SmLs09: 2
};

describe('NIST StRD, one-way analysis of variance, all 11 sets', () => {
	it('are all there', () => {
		expect(Object.keys(sets)).toHaveLength(11);
	});

	it.each(Object.entries(sets))('%s to thirteen certified digits from the numbers as typed', (name, set) => {
		const groups = groupsOf(set);
		const { deviations } = deviationsOfTyped(groups.flat());
		let from = 0;
		const split = groups.map((group) => deviations.slice(from, (from += group.length)));
		expect(worst.note('as typed', name, leastDigits(analyseVariance(split), set))).toBeGreaterThan(13);
	});

	it.each(Object.entries(sets))('%s from doubles, as far as these can tell', (name, set) => {
		const least = leastDigits(analyseVariance(groupsOf(set).map((group) => group.map(Number))), set);
		const bound = digitsOfDoubles[name] ?? 12;
		worst.note(bound < 12 ? `from doubles, ${bound === 2 ? '13' : '7'} digits in common` : 'from doubles', name, least); // prettier-ignore
		expect(least).toBeGreaterThan(bound);
	});

	afterAll(() => worst.print('NIST StRD ANOVA'));
});

describe("Michelson's speed of light, 1879 (R 4.2.2, datasets::morley and anova)", () => {
	const rows = readFileSync(new URL('data/morley_R.csv', import.meta.url), 'utf8')
		.split('\n')
		.filter((line) => /^\d/.test(line))
		.map((line) => line.split(',').map(Number));
	const groups = [1, 2, 3, 4, 5].map((group) =>
		rows.filter(([each]) => each === group).map(([, , speed = NaN]) => speed)
	);

	it('gives the same table as R', () => {
		const analysis = analyseVariance(groups);
		expect(groups.map((group) => group.length)).toEqual([20, 20, 20, 20, 20]);
		expect(analysis?.between.squares).toBeCloseTo(94514, 8);
		expect(analysis?.within.squares).toBeCloseTo(523510, 8);
		expect(analysis?.f).toBeCloseTo(4.2878025, 7);
		expect(analysis?.p).toBeCloseTo(0.003114446, 9);
	});
});
