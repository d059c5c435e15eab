import type { DisplayForms } from '$lib/worksheets';
import { escapeHtml } from './formulas';

const token =
	/[^<>&]+|&(?:[a-z]{2,8}|#\d{1,6}|#x[0-9a-f]{1,6});|<(?:span|sup|sub|i)(?: class="[a-z0-9 -]*")?>|<\/(?:span|sup|sub|i)>/giy;

/**
 * The markup of a value as the workings give it, or its text when the markup holds anything but balanced
 * span, sup, sub and i with class names: evaluations also come out of stored snapshots.
 */
export function shownHtml(display: DisplayForms): string {
	return isPlainMarkup(display.html) ? display.html : escapeHtml(display.text);
}

function isPlainMarkup(html: string): boolean {
	const open: string[] = [];
	let position = 0;
	while (position < html.length) {
		token.lastIndex = position;
		const found = token.exec(html)?.[0];
		if (found === undefined) return false;
		position += found.length;
		const tag = /^<(\/?)([a-z]+)/i.exec(found);
		if (!tag) continue;
		if (tag[1] === '') open.push(tag[2] ?? '');
		else if (open.pop() !== tag[2]) return false;
	}
	return open.length === 0;
}
