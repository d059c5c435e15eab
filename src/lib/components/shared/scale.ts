/** A minor graduation: a check while writing, a block while marking, a remark when returned. */
export interface ScaleTick {
	/** where it leads: "#check-3" */
	href: string;
	/** "Abstract without its best value" */
	label: string;
	/** settled: long; open: short with a ring; stop: a bar across the glass */
	state: 'settled' | 'open' | 'stop';
	/** place within the section, 0 to 1; spread evenly when absent */
	at?: number;
}

/** A major graduation. */
export interface ScaleSection {
	/** id of the element that it leads to and whose place the liquid shows */
	id: string;
	number: string;
	title: string;
	/** words, rows or lines: anything that grows with it */
	length: number;
	/** "4 of 5 checks met" */
	summary?: string;
	ticks?: readonly ScaleTick[];
}

/** Vertical extent of a section on the sheet, px. */
export interface Extent {
	top: number;
	bottom: number;
}

/** Short sections would vanish and long ones swallow the glass if lengths counted in full. */
export function segmentShare(length: number): number {
	return Math.sqrt(Math.max(1, length));
}

/** Where ticks stand in a segment, 0 to 1. */
export function tickPlaces(ticks: readonly ScaleTick[]): number[] {
	return ticks.map((tick, index) =>
		Math.min(0.97, Math.max(0.03, tick.at ?? (index + 1) / (ticks.length + 1)))
	);
}

/**
 * The point of the glass (px) that stands for a point of the sheet (px): linear within each section, held at the ends.
 * `sheet` and `glass` list the same sections in order.
 */
export function pointOnGlass(y: number, sheet: readonly Extent[], glass: readonly Extent[]): number {
	let held = glass[0]?.top ?? 0;
	for (let index = 0; index < sheet.length; index++) {
		const section = sheet[index];
		const segment = glass[index];
		if (section === undefined || segment === undefined) break;
		if (y < section.top) return held;
		const end = Math.max(section.top, sheet[index + 1]?.top ?? section.bottom);
		held = segment.bottom;
		if (y < end)
			return segment.top + ((y - section.top) / (end - section.top)) * (segment.bottom - segment.top);
	}
	return held;
}

/** The section that the reader is in: the last one that begins at or above the reading line. */
export function sectionAt(y: number, sheet: readonly Extent[]): number {
	let current = 0;
	sheet.forEach((section, index) => {
		if (section.top <= y) current = index;
	});
	return current;
}
