import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	criterionMaximum,
	finalMark,
	latePenalty,
	maximum,
	pointsFromWeights,
	scoreOfLevel,
	total,
	type LateRule,
	type Rubric
} from '$lib/rubrics';

const level = (points: number, index: number) => ({ level: index, title: `L${index}`, text: '', points });
const rubric: Rubric = {
	key: 'report',
	title: 'Report',
	criteria: [
		{ key: 'workings', title: 'Workings', asks: '', levels: [0, 7.5, 15, 22.5, 30].map(level) },
		{ key: 'text', title: 'Text', asks: '', levels: [0, 0.1, 0.2, 0.3, 0.7].map(level) }
	]
};

describe('total', () => {
	it('adds decimals exactly', () => {
		// 0.1 + 0.2 in binary is not 0.3.
		const three = {
			...rubric,
			criteria: ['a', 'b', 'c'].map((key) => ({
				...rubric.criteria[1],
				key,
				title: key,
				asks: '',
				levels: [0, 0.1, 0.2].map(level)
			}))
		};
		expect(
			total(three, { a: { level: 1, points: 0.1 }, b: { level: 2, points: 0.2 }, c: { level: 0, points: 0 } })
				.points
		).toBe(0.3);
		expect(maximum(three)).toBe(0.6);
	});

	it('names what is missing', () => {
		expect(total(rubric, { text: { level: 4, points: 0.7 } })).toEqual({
			points: 0.7,
			maximum: 30.7,
			missing: ['workings'],
			complete: false
		});
		expect(total(rubric, { workings: null, constructor: { level: 0, points: 1 } }).missing).toEqual([
			'workings',
			'text'
		]);
	});

	it('takes points between levels and refuses others', () => {
		expect(
			total(rubric, { workings: { level: 3, points: 24.25 }, text: { level: 0, points: 0 } }).points
		).toBe(24.25);
		expect(() => total(rubric, { workings: { level: 4, points: 30.01 } })).toThrow(
			'Workings: 30.01 is outside 0 to 30'
		);
		expect(() => total(rubric, { workings: { level: 0, points: -1 } })).toThrow(RangeError);
		expect(() => total(rubric, { workings: { level: 0, points: 0.125 } })).toThrow('two decimals');
		expect(() => total(rubric, { workings: { level: 0, points: NaN } })).toThrow(RangeError);
	});

	it('is the same in any order', () => {
		fc.assert(
			fc.property(
				fc.array(fc.integer({ min: 0, max: 3000 }), { minLength: 2, maxLength: 12 }),
				(hundredths) => {
					const criteria = hundredths.map((_, index) => ({
						key: `k${index}`,
						title: `k${index}`,
						asks: '',
						levels: [level(0, 0), level(30, 1)]
					}));
					const scores = Object.fromEntries(
						hundredths.map((value, index) => [`k${index}`, { level: 0, points: value / 100 }])
					);
					const forth = total({ key: 'r', title: 'r', criteria }, scores).points;
					const back = total({ key: 'r', title: 'r', criteria: [...criteria].reverse() }, scores).points;
					expect(back).toBe(forth);
					expect(Math.round(forth * 100)).toBe(hundredths.reduce((a, b) => a + b, 0));
				}
			)
		);
	});

	it('finds the score of a level', () => {
		const criterion = rubric.criteria[0];
		if (!criterion) throw new Error('fixture');
		expect(scoreOfLevel(criterion, 3)).toEqual({ level: 3, points: 22.5 });
		expect(scoreOfLevel(criterion, 5)).toBeNull();
		expect(criterionMaximum(criterion)).toBe(30);
	});
});

describe('pointsFromWeights', () => {
	const weighted = (weights: number[]) => ({
		title: 'Report',
		criteria: weights.map((weight, index) => ({
			key: `k${index}`,
			title: `k${index}`,
			asks: '',
			weight,
			levels: [0, 1, 2, 3, 4].map((n) => ({ level: n, title: '', text: '' }))
		}))
	});

	it('shares points by largest remainder', () => {
		// 100 / 3 = 33 + 1/3 each: the point left over goes to the first.
		const made = pointsFromWeights('report', weighted([1, 1, 1]), 100);
		expect(made.criteria.map(criterionMaximum)).toEqual([34, 33, 33]);
		expect(made.criteria[1]?.levels.map((l) => l.points)).toEqual([0, 8.25, 16.5, 24.75, 33]);
	});

	it('always sums to the points asked for', () => {
		fc.assert(
			fc.property(
				fc
					.array(fc.integer({ min: 0, max: 40 }), { minLength: 1, maxLength: 9 })
					.filter((w) => w.some((x) => x > 0)),
				fc.integer({ min: 1, max: 20_000 }),
				(weights, hundredths) => {
					expect(maximum(pointsFromWeights('r', weighted(weights), hundredths / 100))).toBe(hundredths / 100);
				}
			)
		);
	});

	it('refuses weights that share nothing', () => {
		expect(() => pointsFromWeights('r', weighted([0, 0]), 100)).toThrow(RangeError);
		expect(() => pointsFromWeights('r', weighted([1, -1, 2]), 100)).toThrow(RangeError);
	});
});

describe('latePenalty', () => {
	const rule: LateRule = {
		graceMinutes: 10,
		steps: [
			{ upToHours: 24, percent: 5 },
			{ upToHours: 48, percent: 12.5 }
		],
		refuseAfterHours: 96
	};
	const due = Date.UTC(2026, 9, 9, 15, 0);
	const minutes = (count: number) => latePenalty(rule, due, due + count * 60_000);

	it.each([
		[-60, 'On time.', 0, 0],
		[0, 'On time.', 0, 0],
		[10, 'On time, within the grace.', 0, 0],
		[11, "Late by 11 min: 5 % off by this course's rule.", 11, 0.05],
		[120, "Late by 2 h: 5 % off by this course's rule.", 120, 0.05],
		[130, "Late by 2 h 10 min: 5 % off by this course's rule.", 130, 0.05],
		[1440, "Late by 1 day: 5 % off by this course's rule.", 1440, 0.05],
		[1441, "Late by 1 day: 12.5 % off by this course's rule.", 1441, 0.125],
		[3000, "Late by 2 days 2 h: 12.5 % off by this course's rule.", 3000, 0.125]
	])('%d minutes after', (count, sentence, minutesLate, deduction) => {
		const penalty = minutes(count);
		expect({ ...penalty, sentence: penalty.sentence.replaceAll('\u00a0', ' ') }).toEqual({
			late: minutesLate > 0,
			minutesLate,
			deduction,
			refused: false,
			sentence
		});
	});

	it('refuses after the limit, by a second', () => {
		expect(latePenalty(rule, due, due + 96 * 3_600_000).refused).toBe(false);
		const refused = latePenalty(rule, due, due + 96 * 3_600_000 + 1000);
		expect(refused).toMatchObject({ refused: true, deduction: 1, minutesLate: 5761 });
		expect(refused.sentence.replaceAll('\u00a0', ' ')).toBe(
			"Late by 4 days: this course's rule takes nothing later than 4 days."
		);
	});

	it('counts begun minutes and orders steps itself', () => {
		const shuffled = { graceMinutes: 0, steps: [...rule.steps].reverse() };
		expect(latePenalty(shuffled, due, due + 1)).toMatchObject({
			late: true,
			minutesLate: 1,
			deduction: 0.05
		});
		expect(latePenalty({ graceMinutes: 0, steps: [] }, due, due + 1).sentence).toContain('nothing off');
	});

	it('never gets milder with time', () => {
		fc.assert(
			fc.property(fc.nat(6000), fc.nat(6000), (a, b) => {
				const [earlier, later] = a < b ? [a, b] : [b, a];
				expect(minutes(earlier).deduction).toBeLessThanOrEqual(minutes(later).deduction);
			})
		);
	});
});

describe('finalMark', () => {
	it('rounds halves of a hundredth to even', () => {
		// 5 % of 24.50 is 1.225, of 24.70 is 1.235.
		expect(finalMark(24.5, { deduction: 0.05 })).toEqual({ points: 23.28, taken: 1.22 });
		expect(finalMark(24.7, { deduction: 0.05 })).toEqual({ points: 23.46, taken: 1.24 });
		expect(finalMark(80, { deduction: 0 })).toEqual({ points: 80, taken: 0 });
		expect(finalMark(80.35, { deduction: 1 })).toEqual({ points: 0, taken: 80.35 });
	});

	it('loses nothing between what stays and what goes', () => {
		fc.assert(
			fc.property(fc.nat(20_000), fc.nat(10_000), (hundredths, basis) => {
				const mark = finalMark(hundredths / 100, { deduction: basis / 10_000 });
				expect(Math.round(mark.points * 100) + Math.round(mark.taken * 100)).toBe(hundredths);
				expect(Math.abs(Math.round(mark.taken * 100) - (hundredths * basis) / 10_000)).toBeLessThanOrEqual(
					0.5
				);
			})
		);
	});
});
