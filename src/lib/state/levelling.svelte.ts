import { tick } from 'svelte';
import { SvelteMap, SvelteSet } from 'svelte/reactivity';
import { laneRules, levelEntries, remarkRules, type LevelEntry, type LevelledEntry } from './levelling';

/** What an entry tells when it comes into the margin. */
export interface MarginEntry {
	id: string;
	column: 'remarks' | 'lane';
	block: string;
	/** element id of the words, number or figure it talks about */
	anchor: string;
	age: number;
	urgency: number;
	/** natural box of the content, whatever is shown of it */
	content: HTMLElement;
}

/** px by which an entry's line box is lower than its top, so that its first baseline meets that of the text. */
const baselineShift = 5;
/** The sheet has a margin from here on, and a lane of its own from there. */
const marginFrom = '(min-width: 720px)';
const laneFrom = '(min-width: 1024px)';

/**
 * Levels a sheet's margin entries with the lines they talk about. Positions are in content coordinates, so that
 * scrolling costs nothing; it runs again when the page or an entry changes size, on entry and leave, and when asked.
 */
export class Levelling {
	/** The entry in hand. */
	active: string | null = $state(null);

	#page: HTMLElement | null = null;
	// Read only while levelling, which is asked for by hand: nothing draws from these two.
	// eslint-disable-next-line svelte/prefer-svelte-reactivity
	#entries = new Map<string, MarginEntry>();
	// eslint-disable-next-line svelte/prefer-svelte-reactivity
	#heights = new Map<string, number>();
	#opened = new SvelteSet<string>();
	#places = new SvelteMap<string, LevelledEntry>();
	#observer: ResizeObserver | null = null;
	#scheduled = 0;
	#width = 0;

	/** Takes the page column into care; the returned function lets go of it. */
	attach(page: HTMLElement): () => void {
		this.#page = page;
		this.#observer = new ResizeObserver(() => this.again());
		this.#observer.observe(page);
		for (const entry of this.#entries.values()) this.#observer.observe(entry.content);
		// The same column can reflow inside at equal height when a face arrives.
		const fonts = () => this.again();
		document.fonts.addEventListener('loadingdone', fonts);
		this.again();
		return () => {
			document.fonts.removeEventListener('loadingdone', fonts);
			this.#observer?.disconnect();
			this.#observer = null;
			this.#page = null;
			cancelAnimationFrame(this.#scheduled);
			this.#scheduled = 0;
			this.#places.clear();
		};
	}

	register(entry: MarginEntry): () => void {
		this.#entries.set(entry.id, entry);
		this.#observer?.observe(entry.content);
		this.again();
		return () => {
			this.#observer?.unobserve(entry.content);
			if (this.#entries.get(entry.id) === entry) this.#entries.delete(entry.id);
			this.#heights.delete(entry.id);
			this.again();
		};
	}

	placeOf(id: string): LevelledEntry | undefined {
		return this.#places.get(id);
	}

	activate(id: string | null): void {
		if (this.active === id) return;
		this.active = id;
		this.again();
	}

	/** Unfolds the entries of a block; they stay so. */
	open(block: string): void {
		this.#opened.add(block);
		this.again();
	}

	/** From an entry back to the words it talks about. */
	returnToWords(id: string): void {
		const entry = this.#entries.get(id);
		const words = entry && document.getElementById(entry.anchor);
		if (!words) return;
		if (words.tabIndex < 0 && !words.hasAttribute('tabindex')) words.setAttribute('tabindex', '-1');
		words.focus();
	}

	/** Levels in the next frame, once for any number of calls. */
	again(): void {
		if (this.#page === null || this.#scheduled !== 0) return;
		this.#scheduled = requestAnimationFrame(() => {
			this.#scheduled = 0;
			this.#level();
		});
	}

	#level(): void {
		const page = this.#page;
		if (page === null) return;
		if (!matchMedia(marginFrom).matches) {
			this.#places.clear();
			return;
		}
		if (page.clientWidth !== this.#width) {
			// Lines break elsewhere now: everything is measured in full again before it may fold.
			const first = this.#width === 0;
			this.#width = page.clientWidth;
			this.#heights.clear();
			if (!first) {
				this.#places.clear();
				void tick().then(() => this.again());
				return;
			}
		}
		const hasLane = matchMedia(laneFrom).matches;
		const top = page.getBoundingClientRect().top + page.clientTop;
		const remarks: LevelEntry[] = [];
		const lane: LevelEntry[] = [];
		for (const entry of this.#entries.values()) {
			const inLane = entry.column === 'lane' && hasLane;
			const measured = entry.content.getBoundingClientRect().height;
			// A folded entry measures a line or nothing; what it measured in full still holds.
			const form = this.#places.get(entry.id)?.form ?? 'full';
			if (form === 'full' && measured > 0) this.#heights.set(entry.id, measured);
			else if (entry.column === 'lane') continue;
			const line = firstLineOf(document.getElementById(entry.anchor));
			(inLane ? lane : remarks).push({
				id: entry.id,
				wanted: line === null ? 0 : line - top + (inLane ? 0 : baselineShift),
				height: this.#heights.get(entry.id) ?? remarkRules.lineHeight,
				age: entry.age,
				urgency: entry.urgency,
				block: entry.block,
				active: entry.id === this.active,
				opened: this.#opened.has(entry.block)
			});
		}
		const placed = [...levelEntries(remarks, remarkRules), ...levelEntries(lane, laneRules)];
		for (const id of [...this.#places.keys()]) {
			if (!placed.some((place) => place.id === id)) this.#places.delete(id);
		}
		for (const place of placed) {
			const before = this.#places.get(place.id);
			if (
				before === undefined ||
				Math.abs(before.top - place.top) > 0.25 ||
				Math.abs(before.displaced - place.displaced) > 0.25 ||
				before.form !== place.form ||
				before.more !== place.more
			) {
				this.#places.set(place.id, place);
			}
		}
	}
}

/** Top of the first line box in viewport px: words may begin in the middle of a paragraph and span lines. */
function firstLineOf(anchor: HTMLElement | null): number | null {
	const box = anchor?.getClientRects()[0];
	return box === undefined ? null : box.top;
}
