import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	laneRules,
	levelEntries,
	levelTops,
	remarkRules,
	type LevelEntry,
	type LevelRules,
	type LevelledEntry
} from '../../src/lib/state/levelling';

const loose: LevelRules = { ...remarkRules, foldBeyond: Infinity };

function entry(id: string, wanted: number, more: Partial<LevelEntry> = {}): LevelEntry {
	return {
		id,
		wanted,
		height: 42,
		age: 0,
		urgency: 1,
		block: '3.1',
		active: false,
		opened: false,
		...more
	};
}

/** The max-min formula of weighted isotonic regression: another way to the same unique optimum. */
function optimumByMaxMin(boxes: { wanted: number; height: number; weight: number }[]): number[] {
	const above: number[] = [];
	let total = 0;
	for (const box of boxes) {
		above.push(total);
		total += box.height;
	}
	const mean = (from: number, to: number) => {
		let sum = 0;
		let weights = 0;
		for (let index = from; index <= to; index++) {
			const box = boxes[index];
			if (box === undefined) throw new RangeError('no such box');
			sum += box.weight * (box.wanted - (above[index] ?? 0));
			weights += box.weight;
		}
		return sum / weights;
	};
	return boxes.map((_, index) => {
		let best = -Infinity;
		for (let from = 0; from <= index; from++) {
			let least = Infinity;
			for (let to = index; to < boxes.length; to++) least = Math.min(least, mean(from, to));
			best = Math.max(best, least);
		}
		return Math.max(0, best) + (above[index] ?? 0);
	});
}

const boxes = (largest: number) =>
	fc.array(
		fc.record({
			wanted: fc.double({ min: -50, max: 1500, noNaN: true }),
			height: fc.double({ min: 21, max: 200, noNaN: true }),
			weight: fc.constantFrom(1, 1, 1, 1e6)
		}),
		{ minLength: 1, maxLength: largest }
	);

const entries = fc
	.array(
		fc.record({
			wanted: fc.integer({ min: 0, max: 1200 }),
			height: fc.integer({ min: 21, max: 220 }),
			age: fc.integer({ min: 0, max: 3 }),
			urgency: fc.integer({ min: 0, max: 7 }),
			block: fc.constantFrom('1.1', '2.1', '3.1'),
			active: fc.boolean(),
			opened: fc.boolean()
		}),
		{ maxLength: 30 }
	)
	.map((list) => {
		const firstActive = list.findIndex((item) => item.active);
		return list.map((item, index) => ({ ...item, id: `e${index}`, active: index === firstActive }));
	});

function shownHeight(item: LevelEntry, placed: LevelledEntry): number {
	return placed.form === 'full' ? item.height : Math.min(item.height, remarkRules.lineHeight);
}

describe('the least-squares level', () => {
	it('leaves entries with room where they want to be', () => {
		const placed = levelEntries([entry('a', 10), entry('b', 200), entry('c', 400)], remarkRules);
		expect(placed.map(({ top }) => top)).toEqual([10, 200, 400]);
		expect(placed.every(({ displaced, form }) => displaced === 0 && form === 'full')).toBe(true);
	});

	it('shares the displacement of two on one line', () => {
		const placed = levelEntries([entry('a', 100), entry('b', 100, { age: 1 })], remarkRules);
		expect(placed.map(({ top }) => top)).toEqual([72, 128]);
	});

	it('keeps the active one on its line and lets the others give way', () => {
		const placed = levelEntries([entry('a', 100), entry('b', 100, { age: 1, active: true })], remarkRules);
		expect(placed[1]?.top).toBeCloseTo(100, 3);
		expect(placed[0]?.top).toBeCloseTo(44, 3);
	});

	it('never rises above the page', () => {
		const placed = levelEntries([entry('a', 5), entry('b', 5, { age: 1 })], remarkRules);
		expect(placed.map(({ top }) => top)).toEqual([0, 56]);
	});

	it('equals the optimum found another way', () => {
		fc.assert(
			fc.property(boxes(9), (list) => {
				const { tops } = levelTops(list);
				optimumByMaxMin(list).forEach((top, index) => expect(tops[index]).toBeCloseTo(top, 6));
			}),
			{ numRuns: 500 }
		);
	});

	it('is not bettered by any small lawful move', () => {
		const cost = (list: { wanted: number; weight: number }[], tops: number[]) =>
			list.reduce((sum, box, index) => sum + box.weight * ((tops[index] ?? 0) - box.wanted) ** 2, 0);
		fc.assert(
			fc.property(
				boxes(6),
				fc.array(fc.double({ min: -3, max: 3, noNaN: true }), { minLength: 6, maxLength: 6 }),
				(list, moves) => {
					const { tops } = levelTops(list);
					const moved = tops.map((top, index) => top + (moves[index] ?? 0));
					const lawful = moved.every((top, index) => {
						const before = index === 0 ? 0 : (moved[index - 1] ?? 0) + (list[index - 1]?.height ?? 0);
						return top >= before;
					});
					fc.pre(lawful);
					expect(cost(list, moved)).toBeGreaterThanOrEqual(cost(list, tops) - 1e-6 * (1 + cost(list, tops)));
				}
			),
			{ numRuns: 500 }
		);
	});
});

describe('a whole margin', () => {
	it('overlaps nothing and keeps the order, folded or not', () => {
		fc.assert(
			fc.property(entries, fc.constantFrom(remarkRules, loose), (list, rules) => {
				const byId = new Map(list.map((item) => [item.id, item]));
				const placed = levelEntries(list, rules);
				expect(placed).toHaveLength(list.length);
				let floor = 0;
				let wanted = -Infinity;
				for (const place of placed) {
					const item = byId.get(place.id);
					if (item === undefined) throw new Error(`${place.id} came from nowhere`);
					expect(item.wanted).toBeGreaterThanOrEqual(wanted);
					wanted = item.wanted;
					if (place.form === 'hidden') continue;
					expect(place.top).toBeGreaterThanOrEqual(floor - 1e-6);
					floor = place.top + shownHeight(item, place);
				}
			}),
			{ numRuns: 1000 }
		);
	});

	it('loses no entry: the gathered ones speak for all the hidden', () => {
		fc.assert(
			fc.property(entries, (list) => {
				const placed = levelEntries(list, remarkRules);
				const spokenFor = placed
					.filter(({ form }) => form !== 'hidden')
					.reduce((sum, { more }) => sum + more, 0);
				expect(spokenFor).toBe(list.length);
			}),
			{ numRuns: 500 }
		);
	});

	it('never folds the active one nor an opened block', () => {
		fc.assert(
			fc.property(entries, (list) => {
				const placed = new Map(levelEntries(list, remarkRules).map((place) => [place.id, place]));
				for (const item of list) {
					if (item.active || item.opened) expect(placed.get(item.id)?.form).toBe('full');
				}
			}),
			{ numRuns: 500 }
		);
	});

	it('stays within 168 px of the lines unless the whole crowd is folded', () => {
		fc.assert(
			fc.property(entries, (list) => {
				const byId = new Map(list.map((item) => [item.id, item]));
				const shown = levelEntries(list, remarkRules).filter(({ form }) => form !== 'hidden');
				const foot = (place: LevelledEntry) => {
					const item = byId.get(place.id);
					return place.top + (item === undefined ? 0 : shownHeight(item, place));
				};
				const crowds: LevelledEntry[][] = [];
				for (const place of shown) {
					const before = crowds.at(-1)?.at(-1);
					const gap =
						before?.form === 'full' || place.form === 'full' ? remarkRules.gap : remarkRules.lineGap;
					if (before !== undefined && place.top - foot(before) < gap + 1e-6) crowds.at(-1)?.push(place);
					else crowds.push([place]);
				}
				for (const crowd of crowds) {
					if (crowd.every(({ displaced }) => Math.abs(displaced) <= remarkRules.foldBeyond)) continue;
					for (const { id, form } of crowd) {
						const item = byId.get(id);
						const mayFold =
							item !== undefined && !item.active && !item.opened && item.height > remarkRules.lineHeight;
						expect(mayFold && form === 'full').toBe(false);
					}
				}
			}),
			{ numRuns: 1000 }
		);
	});

	it('folds the least urgent and youngest first', () => {
		const list = Array.from({ length: 5 }, (_, index) =>
			entry(`e${index}`, 600, { height: 120, age: index, urgency: index === 1 ? 1 : 5 })
		);
		const placed = levelEntries(list, remarkRules);
		expect(placed.find(({ id }) => id === 'e1')?.form).toBe('line');
		expect(placed.find(({ id }) => id === 'e0')?.form).toBe('full');
		expect(Math.max(...placed.map(({ displaced }) => Math.abs(displaced)))).toBeLessThanOrEqual(168);
	});

	it('gathers what still crowds when every one is a line', () => {
		const list = Array.from({ length: 30 }, (_, index) =>
			entry(`e${index}`, 600, { height: 80, age: index, urgency: index < 2 ? 6 : 1 })
		);
		const placed = levelEntries(list, remarkRules);
		const gathered = placed.filter(({ form }) => form === 'gathered');
		expect(gathered).toHaveLength(1);
		expect(gathered[0]?.more).toBe(placed.filter(({ form }) => form === 'hidden').length + 1);
		expect(Math.max(...placed.map(({ displaced }) => Math.abs(displaced)))).toBeLessThanOrEqual(168);
		// What is most urgent is spoken for last.
		expect(placed.filter(({ id }) => id === 'e0' || id === 'e1').every(({ form }) => form !== 'hidden')).toBe(
			true
		);
		const opened = levelEntries(
			list.map((item) => ({ ...item, opened: true })),
			remarkRules
		);
		expect(opened.every(({ form }) => form === 'full')).toBe(true);
	});

	it('puts lane lines one beneath the other', () => {
		const placed = levelEntries(
			[entry('a', 100, { height: 28 }), entry('b', 100, { height: 28, age: 1 })],
			laneRules
		);
		expect(placed.map(({ top }) => top)).toEqual([86, 114]);
	});
});
