import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { gridWindow, moved, moveOf } from '../../src/lib/components/readings/grid-window';

describe('rows that are drawn', () => {
	it('are all of a short table', () => {
		expect(gridWindow(150, 37, 9_999, 600)).toEqual({ from: 0, to: 150, above: 0, below: 0 });
	});

	it('always cover what is seen, leave the height as it is, and stay few', () => {
		fc.assert(
			fc.property(
				fc.integer({ min: 151, max: 2_001 }),
				fc.integer({ min: 20, max: 60 }),
				fc.double({ min: 0, max: 1, noNaN: true }),
				fc.integer({ min: 100, max: 1_400 }),
				(count, rowHeight, part, viewHeight) => {
					const scrolled = part * Math.max(0, count * rowHeight - viewHeight);
					const { from, to, above, below } = gridWindow(count, rowHeight, scrolled, viewHeight);
					expect(above + (to - from) * rowHeight + below).toBe(count * rowHeight);
					expect(above).toBeLessThanOrEqual(scrolled);
					expect(to * rowHeight).toBeGreaterThanOrEqual(Math.min(scrolled + viewHeight, count * rowHeight));
					expect(to - from).toBeLessThanOrEqual(viewHeight / rowHeight + 42);
				}
			)
		);
	});
});

describe('keys in a cell', () => {
	const caret = (start: number, end: number, length: number) => ({ start, end, length });
	const key = (name: string, over: Partial<Parameters<typeof moveOf>[0]> = {}) => ({
		key: name,
		shiftKey: false,
		altKey: false,
		ctrlKey: false,
		metaKey: false,
		...over
	});

	it('move as a hand at the bench expects', () => {
		const inside = caret(2, 2, 5);
		expect(moveOf(key('Enter'), inside)).toBe('down');
		expect(moveOf(key('Enter', { shiftKey: true }), inside)).toBe('up');
		expect(moveOf(key('Tab'), inside)).toBe('next');
		expect(moveOf(key('Tab', { shiftKey: true }), inside)).toBe('previous');
		expect(moveOf(key('ArrowDown'), inside)).toBe('down');
	});

	it('leave the caret its own way inside the text', () => {
		expect(moveOf(key('ArrowLeft'), caret(2, 2, 5))).toBeNull();
		expect(moveOf(key('ArrowRight'), caret(4, 4, 5))).toBeNull();
		expect(moveOf(key('ArrowRight'), caret(5, 5, 5))).toBe('right');
		expect(moveOf(key('ArrowLeft'), caret(0, 0, 5))).toBe('left');
		expect(moveOf(key('ArrowLeft'), caret(0, 5, 5))).toBe('left');
		expect(moveOf(key('ArrowLeft', { shiftKey: true }), caret(0, 0, 5))).toBeNull();
		expect(moveOf(key('Enter', { ctrlKey: true }), caret(0, 0, 5))).toBeNull();
		expect(moveOf(key('7'), caret(0, 0, 0))).toBeNull();
	});

	it('never lead out of the table, so that Tab leaves it at its ends', () => {
		const size = { rows: 3, columns: 2 };
		expect(moved({ row: 0, column: 1 }, 'next', size)).toEqual({ row: 1, column: 0 });
		expect(moved({ row: 1, column: 0 }, 'previous', size)).toEqual({ row: 0, column: 1 });
		expect(moved({ row: 2, column: 1 }, 'next', size)).toBeNull();
		expect(moved({ row: 0, column: 0 }, 'previous', size)).toBeNull();
		expect(moved({ row: 2, column: 0 }, 'down', size)).toBeNull();
		expect(moved({ row: 0, column: 0 }, 'up', size)).toBeNull();
	});
});
