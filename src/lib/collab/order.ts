/**
 * Places of rows as texts that compare by code unit, so that a row goes between two others without touching them.
 *
 * A text is read as digits 0-9A-Za-z after an imagined point. No text ends in '0', which makes room between any two.
 * Rows appended one after another count up instead of halving: 'a1', 'a2' ... 'az', 'b11' ... (the letter says how many
 * digits follow, each '1' to 'z'), so that 2,000 rows typed in order need three characters, not three hundred.
 */
const digits = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz';
const lowestDigit = '1';
const highestDigit = 'z';

/** A text strictly between `before` and `after`; null means no row on that side. Deterministic: two people may get the same. */
export function orderBetween(before: string | null, after: string | null): string {
	if (after === null) return before === null ? `a${lowestDigit}` : next(before);
	if (before !== null && before >= after) throw new RangeError(`No place between ${before} and ${after}`);
	return middle(before ?? '', after);
}

/** `count` texts in rising order between `before` and `after`. */
export function ordersBetween(before: string | null, after: string | null, count: number): string[] {
	if (count <= 0) return [];
	if (after === null) {
		const orders: string[] = [];
		for (let last = before; orders.length < count;) {
			last = orderBetween(last, null);
			orders.push(last);
		}
		return orders;
	}
	// Halving keeps the texts short: the length grows with the logarithm of the count.
	const half = Math.floor(count / 2);
	const centre = orderBetween(before, after);
	return [...ordersBetween(before, centre, half), centre, ...ordersBetween(centre, after, count - half - 1)];
}

/** Rows of equal place are ordered by id, the same for everyone. */
export function compareOrder(a: { order: string; id: string }, b: { order: string; id: string }): number {
	if (a.order !== b.order) return a.order < b.order ? -1 : 1;
	return a.id < b.id ? -1 : a.id > b.id ? 1 : 0;
}

function middle(before: string, after: string): string {
	let index = 0;
	while (digitAt(before, index) === digitAt(after, index) && index < after.length) index += 1;
	const head = after.slice(0, index);
	const low = digitAt(before, index);
	const high = digitAt(after, index);
	if (high - low > 1) return head + (digits[Math.floor((low + high) / 2)] ?? '');
	// Neighbouring digits: keep the lower one and go above what follows it.
	return head + (digits[low] ?? '') + above(before.slice(index + 1));
}

/** The shortest text above `text`, about half way to the end. */
function above(text: string): string {
	const low = digitAt(text, 0);
	const centre = Math.ceil((low + digits.length) / 2);
	if (centre < digits.length && centre > low) return digits[centre] ?? '';
	return (digits[low] ?? '') + above(text.slice(1));
}

function next(before: string): string {
	const head = before[0] ?? '';
	if (head < 'a') return `a${lowestDigit}`;
	const size = head.charCodeAt(0) - 'a'.charCodeAt(0) + 1;
	const counted = Array.from(
		{ length: size },
		(_, index) => digits[digitAt(before, 1 + index)] ?? lowestDigit
	);
	for (let index = size - 1; index >= 0; index -= 1) {
		const digit = counted[index] ?? lowestDigit;
		if (digit !== highestDigit) {
			counted[index] = digits[digits.indexOf(digit) + 1] ?? highestDigit;
			return head + counted.map((value) => (value === '0' ? lowestDigit : value)).join('');
		}
		counted[index] = lowestDigit;
	}
	if (head === highestDigit) return before + above('');
	return String.fromCharCode(head.charCodeAt(0) + 1) + lowestDigit.repeat(size + 1);
}

/** Missing digits are 0. */
function digitAt(text: string, index: number): number {
	const digit = text[index];
	return digit === undefined ? 0 : Math.max(0, digits.indexOf(digit));
}
