import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase } from '../../src/lib/server/db';
import { Refusal } from '../../src/lib/server/errors';
import * as marking from '../../src/lib/server/marking';
import * as moderation from '../../src/lib/server/moderation';
import type { Viewer } from '../../src/lib/server/auth';
import { act } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';
import {
	handedIn,
	markingCourse,
	points,
	setLevels,
	type HandedIn,
	type MarkingCourse
} from './marking-rows';

let fresh: FreshDatabase;
let course: MarkingCourse;
/** levels of method, uncertainty and writing, with who marked */
const marked = [
	{ section: 'tuesday', by: 'grader', levels: [3, 2, 2] },
	{ section: 'tuesday', by: 'grader', levels: [2, 1, 2] },
	{ section: 'tuesday', by: 'grader', levels: [2, 2, 1] },
	{ section: 'tuesday', by: 'colleague', levels: [1, 1, 0] },
	{ section: 'tuesday', by: 'colleague', levels: [3, 1, 1] },
	{ section: 'thursday', by: 'elsewhere', levels: [0, 1, 2] },
	{ section: 'thursday', by: 'elsewhere', levels: [2, 0, 1] }
] as const;

async function mark(viewer: Viewer, report: HandedIn, levels: readonly number[], finish = true) {
	const state = await setLevels(course, viewer, report.alias, levels);
	if (finish) await marking.finishMarking(act(viewer, { revision: state.revision }), { marking: state.id });
}

beforeAll(async () => {
	fresh = await freshDatabase();
	course = await markingCourse();
	const authors = ['=SUM(A1) Bly', '+1 Cole', '-2 Dahl', '@home Ek', 'Ferro, "Gi"', 'Hale', 'Ivo'];
	for (const [index, one] of marked.entries()) {
		// A late one counts with what it was marked: the spread is about marking.
		const report = await handedIn(course, {
			section: one.section,
			author: authors[index] ?? 'Nemo',
			lateMinutes: index === 0 ? 120 : -5
		});
		await mark(course[one.by], report, one.levels);
	}
	await mark(course.grader, await handedIn(course), [0, 0, 0], false);
	await handedIn(course);
}, 120_000);
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

const totalOf = (levels: readonly [number, number, number]) =>
	((points.method[levels[0]] ?? 0) +
		(points.uncertainty[levels[1]] ?? 0) +
		(points.writing[levels[2]] ?? 0)) /
	100;

/** The median as the definition has it: half of the sorted values on each side. */
function medianOf(values: number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	const half = Math.floor(sorted.length / 2);
	return sorted.length % 2 === 1
		? (sorted[half] ?? NaN)
		: ((sorted[half - 1] ?? NaN) + (sorted[half] ?? NaN)) / 2;
}

describe('the spread', () => {
	it('agrees with a computation of its own', async () => {
		const spread = await moderation.readSpread(course.instructor, { courseId: course.id });
		// 11, 7.75, 9, 4, 7.25, 4.5, 4: by the rubric's points, added by hand.
		const totals = marked.map(({ levels }) => totalOf(levels));
		expect(totals).toEqual([11, 7.75, 9, 4, 7.25, 4.5, 4]);
		expect(spread.maximum).toBe(11);
		expect(spread.handedIn).toBe(9);
		expect(spread.all.values).toEqual([...totals].sort((a, b) => a - b));
		const { summary } = spread.all;
		expect(summary.n).toBe(7);
		expect(summary.mean).toBeCloseTo(47.5 / 7, 12);
		const squares = totals.reduce((sum, value) => sum + (value - 47.5 / 7) ** 2, 0);
		expect(summary.standardDeviation).toBeCloseTo(Math.sqrt(squares / 6), 12);
		// Type 7: of 4 4 4.5 7.25 7.75 9 11 the quartiles stand at places 2.5 and 5.5.
		expect(summary).toMatchObject({
			minimum: 4,
			lowerQuartile: 4.25,
			median: 7.25,
			upperQuartile: 8.375,
			maximum: 11
		});
	});

	it('groups by lab section and by grader', async () => {
		const spread = await moderation.readSpread(course.instructor, {
			courseId: course.id,
			assignment: course.assignmentId
		});
		const groups = (by: 'section' | 'by', name: string) =>
			marked.filter((one) => one[by] === name).map(({ levels }) => totalOf(levels));
		expect(spread.sections.map(({ name, summary }) => [name, summary.n, summary.median])).toEqual([
			['Thursday', 2, medianOf(groups('section', 'thursday'))],
			['Tuesday', 5, medianOf(groups('section', 'tuesday'))]
		]);
		expect(spread.graders.map(({ name, summary }) => [name, summary.n, summary.median])).toEqual([
			['Amal Haddad', 3, medianOf(groups('by', 'grader'))],
			['Bo Lindgren', 2, medianOf(groups('by', 'colleague'))],
			['Jonas Weber', 2, medianOf(groups('by', 'elsewhere'))]
		]);
		expect(spread.sentence).toBe(
			'7 of 9 reports marked: median 7.25 of 11, the middle half from 4.25 to 8.38.'
		);
	});

	it('counts the levels of each criterion', async () => {
		const spread = await moderation.readSpread(course.instructor, { courseId: course.id });
		for (const [place, criterion] of spread.criteria.entries()) {
			for (const { level, all, sections } of criterion.levels) {
				const got = marked.filter((one) => one.levels[place] === level);
				expect(all).toBe(got.length);
				expect(sections).toEqual([
					got.filter((one) => one.section === 'thursday').length,
					got.filter((one) => one.section === 'tuesday').length
				]);
			}
		}
	});

	it('is the instructor’s alone, and knows its own course’s assignments only', async () => {
		const kindOf = (viewer: Viewer, assignment?: string) =>
			moderation.readSpread(viewer, { courseId: course.id, assignment }).then(
				() => 'shown',
				(thrown: unknown) => (thrown instanceof Refusal ? thrown.kind : thrown)
			);
		expect(await kindOf(course.grader)).toBe('forbidden');
		expect(await kindOf(course.stranger)).toBe('not-found');
		const other = await markingCourse();
		expect(await kindOf(course.instructor, other.assignmentId)).toBe('not-found');
		const empty = await moderation.readSpread(other.instructor, { courseId: other.id });
		expect(empty.sentence).toBe('Nothing handed in yet.');
		expect(empty.all.summary).toMatchObject({ n: 0, mean: null, median: null, standardDeviation: null });
	});

	it('goes out as CSV in which no name runs as a formula', async () => {
		const { fileName, text } = await moderation.spreadTable(course.instructor, { courseId: course.id });
		expect(fileName).toBe('spread-enthalpy-of-vaporization-of-water.csv');
		expect(
			text.startsWith('\uFEFFReport,Lab section,Team,Author,Grader,Method,Uncertainty,Writing,Total,Of,')
		).toBe(true);
		const lines = text.slice(1).trimEnd().split('\r\n');
		expect(lines).toHaveLength(1 + marked.length);
		for (const name of ["'=SUM(A1) Bly", "'+1 Cole", "'-2 Dahl", "'@home Ek", '"Ferro, ""Gi"""'])
			expect(text).toContain(`,${name},`);
		const late = lines.find((line) => line.includes('Bly'));
		// 5 % of 11 is 0.55.
		expect(late?.endsWith(',4,5,2,11,11,0.55,10.45,no')).toBe(true);
	});
});
