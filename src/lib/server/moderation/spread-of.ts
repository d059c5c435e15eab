import type { SpreadGroup, SpreadShape, SpreadSummary } from '$lib/contracts/moderation';
import { fiveNumbers, mean, standardDeviation } from '$lib/statistics';

/** One finished marking as the spread counts it. Points as points, before any late rule: the spread is about marking. */
export interface SpreadRow {
	labSection: string;
	grader: string;
	points: number;
	levels: { criterion: string; level: number }[];
}

export interface SpreadCriterion {
	id: string;
	title: string;
	levels: { level: number; text: string }[];
}

/** Groups smaller than this are told as such: quartiles of a handful say little. */
export const smallGroup = 5;

export function summaryOf(values: readonly number[]): SpreadSummary {
	const five = fiveNumbers(values);
	return {
		n: values.length,
		mean: values.length > 0 ? mean(values) : null,
		standardDeviation: values.length > 1 ? standardDeviation(values) : null,
		minimum: five?.minimum ?? null,
		lowerQuartile: five?.lowerQuartile ?? null,
		median: five?.median ?? null,
		upperQuartile: five?.upperQuartile ?? null,
		maximum: five?.maximum ?? null
	};
}

function groupOf(name: string, rows: readonly SpreadRow[]): SpreadGroup {
	const values = rows.map((row) => row.points).sort((a, b) => a - b);
	return { name, values, summary: summaryOf(values) };
}

function namesIn(rows: readonly SpreadRow[], of: (row: SpreadRow) => string): string[] {
	return [...new Set(rows.map(of))].sort((a, b) => a.localeCompare(b, 'en'));
}

/** '17', '17.5', '17.25': a mark with no more digits than it has. */
export function pointsInWords(points: number): string {
	return String(Math.round(points * 100) / 100).replace('-', '\u2212');
}

/** How far the medians of groups large enough to have one lie apart, in words. */
function apart(groups: readonly SpreadGroup[], what: string): string {
	const large = groups.filter((group) => group.summary.n >= smallGroup);
	if (large.length < 2) return '';
	const byMedian = [...large].sort((a, b) => (a.summary.median ?? 0) - (b.summary.median ?? 0));
	const low = byMedian[0];
	const high = byMedian[byMedian.length - 1];
	if (!low || !high) return '';
	const gap = (high.summary.median ?? 0) - (low.summary.median ?? 0);
	if (gap === 0) return ` The ${what} have one median.`;
	return ` Medians by ${what.replace(/s$/, '')} lie ${pointsInWords(gap)} points apart, from ${low.name} to ${high.name}.`;
}

function sentenceOf(
	handedIn: number,
	all: SpreadGroup,
	sections: readonly SpreadGroup[],
	graders: readonly SpreadGroup[],
	maximum: number
): string {
	const { n, median, lowerQuartile, upperQuartile } = all.summary;
	if (n === 0)
		return handedIn === 0 ? 'Nothing handed in yet.' : `None of ${String(handedIn)} reports is marked yet.`;
	const marked = `${String(n)} of ${String(handedIn)} reports marked`;
	if (n < smallGroup)
		return `${marked}: too few to speak of a spread. Median ${pointsInWords(median ?? 0)} of ${pointsInWords(maximum)}.`;
	return `${marked}: median ${pointsInWords(median ?? 0)} of ${pointsInWords(maximum)}, the middle half from ${pointsInWords(lowerQuartile ?? 0)} to ${pointsInWords(upperQuartile ?? 0)}.${apart(sections, 'lab sections')}${apart(graders, 'graders')}`;
}

/** Distribution of totals and of criteria by lab section and by grader. */
export function spreadOf(
	rows: readonly SpreadRow[],
	criteria: readonly SpreadCriterion[],
	handedIn: number,
	maximum: number
): Pick<SpreadShape, 'sentence' | 'all' | 'sections' | 'graders' | 'criteria' | 'maximum' | 'handedIn'> {
	const sectionNames = namesIn(rows, (row) => row.labSection);
	const graderNames = namesIn(rows, (row) => row.grader);
	const ofSection = (name: string) => rows.filter((row) => row.labSection === name);
	const ofGrader = (name: string) => rows.filter((row) => row.grader === name);
	const all = groupOf('All', rows);
	const sections = sectionNames.map((name) => groupOf(name, ofSection(name)));
	const graders = graderNames.map((name) => groupOf(name, ofGrader(name)));
	return {
		maximum,
		handedIn,
		sentence: sentenceOf(handedIn, all, sections, graders, maximum),
		all,
		sections,
		graders,
		criteria: criteria.map(({ id, title, levels }) => ({
			id,
			title,
			levels: levels.map(({ level, text }) => {
				const count = (among: readonly SpreadRow[]) =>
					among.filter((row) => row.levels.some((got) => got.criterion === id && got.level === level)).length;
				return {
					level,
					text,
					all: count(rows),
					sections: sectionNames.map((name) => count(ofSection(name))),
					graders: graderNames.map((name) => count(ofGrader(name)))
				};
			})
		}))
	};
}
