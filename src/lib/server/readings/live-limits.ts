/** What files may hold, and what a live table takes. */
export const largestFile = 10 * 1024 * 1024;
export const fileRows = 50_000;
export const liveRows = 2_000;
/** Longest cell that a live table takes, characters: a note may be a paragraph, not a document. */
export const longestCell = 1_000;

/**
 * Records of delimited text, counted in one pass without taking it apart, so that a huge file is refused before it costs
 * anything. Quotes are followed, blank lines are not counted.
 */
export function countRecords(text: string): number {
	let records = 0;
	let quoted = false;
	let blank = true;
	for (let at = 0; at < text.length; at += 1) {
		const code = text.charCodeAt(at);
		if (code === 34) {
			quoted = !quoted;
			blank = false;
		} else if (!quoted && (code === 10 || code === 13)) {
			if (!blank) records += 1;
			blank = true;
		} else if (code !== 32 && code !== 9) blank = false;
	}
	return blank ? records : records + 1;
}
