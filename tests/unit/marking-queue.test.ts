import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { MarkingState } from '../../src/lib/contracts/marking';
import {
	enqueue,
	levelsWith,
	remarksWith,
	stillApplies,
	type Words,
	type Write
} from '../../src/lib/state/marking-queue';

const anchor = { section: 1, projection: 1, links: [], selectors: [] };
const words = (body: string): Words => ({ kind: 'note', body });
const state = (levels: Record<string, number>, remarks: Record<string, string>): MarkingState => ({
	id: 'm',
	alias: 'linden-000000',
	label: 'Linden 000000',
	revision: 1,
	edition: 'e',
	finishedAt: null,
	returned: false,
	levels: Object.entries(levels).map(([criterion, level]) => ({ criterion, level, points: level, at: 't' })),
	remarks: Object.entries(remarks).map(([id, body]) => ({ id, ...words(body), at: 't', anchor: null })),
	total: { points: 0, maximum: 0, set: 0, of: 0 }
});

/** What the server makes of one write, on a plain model. */
function applied(before: MarkingState, write: Write): MarkingState {
	if (write.kind === 'level')
		return {
			...before,
			levels: [
				...before.levels.filter((row) => row.criterion !== write.criterion),
				...(write.level === null
					? []
					: [{ criterion: write.criterion, level: write.level, points: write.level, at: 't' }])
			]
		};
	const others = before.remarks.filter((remark) => remark.id !== write.remark);
	if (write.kind === 'delete') return { ...before, remarks: others };
	return { ...before, remarks: [...others, { id: write.remark, ...write.words, at: 't', anchor: null }] };
}

const plain = (shown: MarkingState) => ({
	levels: Object.fromEntries(shown.levels.map((row) => [row.criterion, row.level])),
	remarks: Object.fromEntries(shown.remarks.map((remark) => [remark.id, remark.body]))
});

describe('the queue of a marking', () => {
	it('joins what has not been sent, and never what is on its way', () => {
		const level = (to: number | null, was: number | null): Write => ({
			kind: 'level',
			criterion: 'a',
			level: to,
			was
		});
		expect(enqueue([level(1, null)], level(2, 1), 0)).toEqual([level(2, null)]);
		expect(enqueue([level(1, null)], level(2, 1), 1)).toEqual([level(1, null), level(2, 1)]);
		// Back to what the server has: nothing left to send.
		expect(enqueue([level(1, null)], level(null, 1), 0)).toEqual([]);
	});

	it('a remark added, changed and deleted before it was sent leaves nothing', () => {
		let queue: Write[] = [];
		queue = enqueue(queue, { kind: 'add', remark: 'r', words: words('One'), anchor }, 0);
		queue = enqueue(queue, { kind: 'revise', remark: 'r', words: words('Two'), was: words('One') }, 0);
		expect(queue).toEqual([{ kind: 'add', remark: 'r', words: words('Two'), anchor }]);
		expect(enqueue(queue, { kind: 'delete', remark: 'r', was: words('Two') }, 0)).toEqual([]);
	});

	it('whatever is joined, the server ends where the acts did', () => {
		const act = fc.oneof(
			fc.record({
				criterion: fc.constantFrom('a', 'b'),
				level: fc.constantFrom(null, 0, 1, 2)
			}),
			fc.record({
				remark: fc.constantFrom('r', 's', 't'),
				body: fc.constantFrom(null, 'One', 'Two', 'Three')
			})
		);
		fc.assert(
			fc.property(
				fc.array(act, { maxLength: 25 }),
				fc.array(fc.boolean(), { maxLength: 40 }),
				(acts, sends) => {
					let server = state({ a: 1 }, { r: 'One' });
					let model = server;
					let queue: Write[] = [];
					const turns = [...sends];
					for (const one of acts) {
						let write: Write;
						if ('criterion' in one) {
							const was = model.levels.find((row) => row.criterion === one.criterion)?.level ?? null;
							write = { kind: 'level', ...one, was };
						} else {
							const there = model.remarks.find((remark) => remark.id === one.remark);
							const was = there ? words(there.body) : null;
							if (one.body === null) {
								if (!there) continue;
								write = { kind: 'delete', remark: one.remark, was };
							} else if (there || one.remark === 'r')
								write = { kind: 'revise', remark: one.remark, words: words(one.body), was };
							else write = { kind: 'add', remark: one.remark, words: words(one.body), anchor };
						}
						model = applied(model, write);
						queue = enqueue(queue, write, 0);
						// The page shows what was done, sent or not.
						expect(levelsWith(server, queue)).toMatchObject(plain(model).levels);
						const first = queue[0];
						if (turns.pop() && first) {
							expect(stillApplies(first, server)).toBe(true);
							server = applied(server, first);
							queue = queue.slice(1);
						}
					}
					for (const write of queue) server = applied(server, write);
					expect(plain(server)).toEqual(plain(model));
				}
			),
			{ numRuns: 500, seed: 310 }
		);
	});

	it('shows unsent remarks as such', () => {
		const shown = remarksWith(
			state({}, { r: 'One', s: 'Two' }),
			[
				{ kind: 'revise', remark: 'r', words: words('Other'), was: words('One') },
				{ kind: 'delete', remark: 's', was: words('Two') },
				{ kind: 'add', remark: 'n', words: words('New'), anchor }
			],
			'now'
		);
		expect(shown.map(({ id, body, unsent }) => [id, body, unsent])).toEqual([
			['r', 'Other', true],
			['n', 'New', true]
		]);
	});

	it('tells a change of the same thing from a change beside it', () => {
		const mine: Write = { kind: 'level', criterion: 'a', level: 3, was: 1 };
		expect(stillApplies(mine, state({ a: 1, b: 2 }, {}))).toBe(true);
		expect(stillApplies(mine, state({ a: 2 }, {}))).toBe(false);
		const remark: Write = { kind: 'revise', remark: 'r', words: words('Mine'), was: words('One') };
		expect(stillApplies(remark, state({ a: 2 }, { r: 'One' }))).toBe(true);
		expect(stillApplies(remark, state({}, { r: 'Theirs' }))).toBe(false);
		expect(stillApplies(remark, state({}, {}))).toBe(false);
	});
});
