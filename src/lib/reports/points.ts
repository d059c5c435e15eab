/** Code points, the unit of positions in projections (W3C Web Annotation), against UTF-16 units, JavaScript's own. */

export function countPoints(text: string): number {
	let count = 0;
	for (let index = 0; index < text.length; index += 1) {
		if (isHighSurrogate(text.charCodeAt(index)) && isLowSurrogate(text.charCodeAt(index + 1))) index += 1;
		count += 1;
	}
	return count;
}

/** UTF-16 offset of the code point `points`; the end of the text when there are fewer. */
export function unitOffset(text: string, points: number): number {
	let index = 0;
	for (let passed = 0; passed < points && index < text.length; passed += 1) {
		index += isHighSurrogate(text.charCodeAt(index)) && isLowSurrogate(text.charCodeAt(index + 1)) ? 2 : 1;
	}
	return index;
}

/** Code points wholly before UTF-16 offset `units`. An offset inside a surrogate pair counts as before the pair. */
export function pointOffset(text: string, units: number): number {
	const inside =
		units > 0 && isHighSurrogate(text.charCodeAt(units - 1)) && isLowSurrogate(text.charCodeAt(units));
	return countPoints(text.slice(0, inside ? units - 1 : units));
}

export function slicePoints(text: string, start: number, end: number): string {
	const from = unitOffset(text, start);
	return text.slice(from, from + unitOffset(text.slice(from), Math.max(0, end - start)));
}

function isHighSurrogate(unit: number): boolean {
	return unit >= 0xd800 && unit <= 0xdbff;
}

function isLowSurrogate(unit: number): boolean {
	return unit >= 0xdc00 && unit <= 0xdfff;
}
