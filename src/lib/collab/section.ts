import * as Y from 'yjs';

// Shape of a section document: one shared text, 'text'.
export function sectionText(doc: Y.Doc): Y.Text {
	return doc.getText('text');
}

export function readText(doc: Y.Doc): string {
	return sectionText(doc).toString();
}

/**
 * Turns the text into `wanted` by replacing only the stretch that differs: restoring an older version is an ordinary
 * edit, and what others type outside the stretch meanwhile stays.
 */
export function writeText(doc: Y.Doc, wanted: string): void {
	const text = sectionText(doc);
	const current = text.toString();
	const shorter = Math.min(current.length, wanted.length);
	let start = 0;
	while (start < shorter && current[start] === wanted[start]) start += 1;
	let end = 0;
	while (end < shorter - start && current[current.length - 1 - end] === wanted[wanted.length - 1 - end])
		end += 1;
	// Never cut a surrogate pair in two: halves would be stored as replacement characters.
	if (isLowSurrogate(current[start]) || isLowSurrogate(wanted[start])) start -= 1;
	if (end > 0 && isLowSurrogate(current[current.length - end])) end -= 1;
	start = Math.max(0, start);
	doc.transact(() => {
		const removed = current.length - end - start;
		if (removed > 0) text.delete(start, removed);
		const inserted = wanted.slice(start, wanted.length - end);
		if (inserted !== '') text.insert(start, inserted);
	});
}

function isLowSurrogate(unit: string | undefined): boolean {
	return unit !== undefined && unit >= '\uDC00' && unit <= '\uDFFF';
}
