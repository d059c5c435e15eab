/** Rows up to this many are all drawn; beyond it only those near the view. */
export const drawnWhole = 150;
/** Rows drawn above and below what is seen, so that a turn of the wheel shows no gap. */
const margin = 20;

export interface GridWindow {
	from: number;
	to: number;
	/** px of the rows left out above and below */
	above: number;
	below: number;
}

/** Which rows of a long table are drawn, from the scrolled distance and heights in px. All rows are `rowHeight` high. */
export function gridWindow(
	count: number,
	rowHeight: number,
	scrolled: number,
	viewHeight: number
): GridWindow {
	if (count <= drawnWhole || rowHeight <= 0) return { from: 0, to: count, above: 0, below: 0 };
	const from = Math.min(Math.max(0, Math.floor(scrolled / rowHeight) - margin), Math.max(0, count - margin));
	const to = Math.min(count, Math.ceil((scrolled + Math.max(viewHeight, rowHeight)) / rowHeight) + margin);
	return {
		from,
		to: Math.max(to, from),
		above: from * rowHeight,
		below: (count - Math.max(to, from)) * rowHeight
	};
}

export type Move = 'up' | 'down' | 'left' | 'right' | 'next' | 'previous';

/** Where a key leads from a cell, or null when the browser's own meaning of the key holds. Cells count from 0. */
export function moved(
	at: { row: number; column: number },
	move: Move,
	size: { rows: number; columns: number }
): { row: number; column: number } | null {
	const { row, column } = at;
	const last = size.columns - 1;
	switch (move) {
		case 'up':
			return row > 0 ? { row: row - 1, column } : null;
		case 'down':
			return row < size.rows - 1 ? { row: row + 1, column } : null;
		case 'left':
			return column > 0 ? { row, column: column - 1 } : null;
		case 'right':
			return column < last ? { row, column: column + 1 } : null;
		case 'next':
			if (column < last) return { row, column: column + 1 };
			return row < size.rows - 1 ? { row: row + 1, column: 0 } : null;
		case 'previous':
			if (column > 0) return { row, column: column - 1 };
			return row > 0 ? { row: row - 1, column: last } : null;
	}
}

/** What a key in a text cell means; null for typing and the caret's own movements. */
export function moveOf(
	key: { key: string; shiftKey: boolean; altKey: boolean; ctrlKey: boolean; metaKey: boolean },
	caret: { start: number | null; end: number | null; length: number }
): Move | null {
	if (key.altKey || key.ctrlKey || key.metaKey) return null;
	const collapsed = caret.start === caret.end;
	const whole = caret.start === 0 && caret.end === caret.length;
	switch (key.key) {
		case 'Enter':
			return key.shiftKey ? 'up' : 'down';
		case 'ArrowUp':
			return 'up';
		case 'ArrowDown':
			return 'down';
		case 'ArrowLeft':
			return !key.shiftKey && (whole || (collapsed && caret.start === 0)) ? 'left' : null;
		case 'ArrowRight':
			return !key.shiftKey && (whole || (collapsed && caret.end === caret.length)) ? 'right' : null;
		case 'Tab':
			return key.shiftKey ? 'previous' : 'next';
		default:
			return null;
	}
}
