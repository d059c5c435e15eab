/** An entry of a margin, in content coordinates (px from the top of the page column). */
export interface LevelEntry {
	id: string;
	/** top of the first line it talks about */
	wanted: number;
	/** natural height, px */
	height: number;
	/** order among entries on one line: smaller is older */
	age: number;
	/** larger stays open longer */
	urgency: number;
	/** entries that may gather into one line together */
	block: string;
	/** the entry in hand: it stands where it wants to, the others give way, and it never folds */
	active: boolean;
	/** its block was opened by hand: it never folds */
	opened: boolean;
}

export interface LevelledEntry {
	id: string;
	top: number;
	/** top - wanted: below its line (+) or above it (-) */
	displaced: number;
	form: 'full' | 'line' | 'gathered' | 'hidden';
	/** how many entries a gathered one speaks for, itself included; 1 otherwise */
	more: number;
}

export interface LevelRules {
	/** px between two entries */
	gap: number;
	/** px between two folded ones */
	lineGap: number;
	/** px that a folded entry takes */
	lineHeight: number;
	/** px of displacement from which neighbours fold */
	foldBeyond: number;
	/** weight of the active entry, against 1 of the others */
	activeWeight: number;
}

export const remarkRules: LevelRules = {
	gap: 14,
	lineGap: 2,
	lineHeight: 21,
	foldBeyond: 168,
	activeWeight: 1e6
};
/** One 28 px line each; nothing to fold. */
export const laneRules: LevelRules = {
	gap: 0,
	lineGap: 0,
	lineHeight: 28,
	foldBeyond: Infinity,
	activeWeight: 1e6
};

/** px of displacement past which a hairline leads to the words. */
export const leaderBeyond = 7;

interface Box {
	wanted: number;
	/** with the gap to the next one */
	height: number;
	weight: number;
}

/** Adjacent entries that touch: tops are `start` plus what stands above within the run. */
interface Run {
	first: number;
	last: number;
	weight: number;
	mean: number;
}

/**
 * Tops of boxes in a given order that minimise the weighted squares of displacement, none overlapping, none above 0. Subtracting cumulative heights turns "not overlapping" into "not decreasing":
 * weighted isotonic regression, solved exactly by pooling adjacent violators; its solution under a lower bound is the
 * clamped one. O(n).
 */
export function levelTops(boxes: readonly Box[]): { tops: number[]; runs: [number, number][] } {
	const above: number[] = [];
	let total = 0;
	for (const box of boxes) {
		above.push(total);
		total += box.height;
	}
	const runs: Run[] = [];
	boxes.forEach((box, index) => {
		let run: Run = { first: index, last: index, weight: box.weight, mean: box.wanted - (above[index] ?? 0) };
		for (let before = runs.at(-1); before !== undefined && before.mean > run.mean; before = runs.at(-1)) {
			runs.pop();
			const weight = before.weight + run.weight;
			run = {
				first: before.first,
				last: run.last,
				weight,
				mean: (before.mean * before.weight + run.mean * run.weight) / weight
			};
		}
		runs.push(run);
	});
	const tops: number[] = [];
	for (const run of runs) {
		for (let index = run.first; index <= run.last; index++) {
			tops.push(Math.max(0, run.mean) + (above[index] ?? 0));
		}
	}
	// Runs that the clamp or equality has pushed together crowd each other like one.
	const crowds: [number, number][] = [];
	let level = NaN;
	for (const run of runs) {
		const start = Math.max(0, run.mean);
		const crowd = crowds.at(-1);
		if (crowd !== undefined && start === level) crowd[1] = run.last;
		else crowds.push([run.first, run.last]);
		level = start;
	}
	return { tops, runs: crowds };
}

type Form = LevelledEntry['form'];

/**
 * Levels the entries of one margin. Where a crowd stands farther than `foldBeyond` from its lines, its least urgent
 * entries fold to a line; when that is not enough, the folded ones of a block gather into "5 more on 3.1". What turns
 * out to have room after all unfolds again, most urgent first. The active entry and opened blocks stay whole.
 */
export function levelEntries(entries: readonly LevelEntry[], rules: LevelRules): LevelledEntry[] {
	const order = [...entries].sort((a, b) => a.wanted - b.wanted || a.age - b.age || (a.id < b.id ? -1 : 1));
	const forms: Form[] = order.map(() => 'full');
	const more: number[] = order.map(() => 1);

	let margin = standing(order, forms, rules);
	for (;;) {
		// A crowd in which nothing is left to fold must not keep the others from being served.
		const crowds = farCrowds(margin, rules.foldBeyond);
		const eased = crowds.some(([first, last]) => {
			const members = margin.shown.slice(first, last + 1);
			return foldOne(members, forms, rules) || gatherOne(members, forms, more);
		});
		if (!eased) break;
		margin = standing(order, forms, rules);
	}
	margin = unfoldWhatFits(order, forms, rules, margin);

	const places = new Map(margin.shown.map(({ index }, place) => [index, place]));
	let lastTop = 0;
	return order.map((entry, index) => {
		const place = places.get(index);
		if (place !== undefined) lastTop = margin.tops[place] ?? 0;
		return {
			id: entry.id,
			top: lastTop,
			displaced: place === undefined ? 0 : (margin.displaced[place] ?? 0),
			form: forms[index] ?? 'full',
			more: more[index] ?? 1
		};
	});
}

interface Member {
	entry: LevelEntry;
	/** place in the order of all entries */
	index: number;
}

interface Margin {
	/** what is not spoken for by another */
	shown: Member[];
	tops: number[];
	displaced: number[];
	runs: [number, number][];
}

/** Where everything stands with these forms. */
function standing(order: readonly LevelEntry[], forms: readonly Form[], rules: LevelRules): Margin {
	const shown = order.flatMap((entry, index) => (forms[index] === 'hidden' ? [] : [{ entry, index }]));
	const boxes = shown.map(({ entry, index }, place) => {
		const next = shown[place + 1];
		const whole = forms[index] === 'full';
		const nextWhole = next === undefined || forms[next.index] === 'full';
		return {
			wanted: entry.wanted,
			height:
				(whole ? entry.height : Math.min(entry.height, rules.lineHeight)) +
				(whole || nextWhole ? rules.gap : rules.lineGap),
			weight: entry.active ? rules.activeWeight : 1
		};
	});
	const { tops, runs } = levelTops(boxes);
	return { shown, tops, displaced: shown.map(({ entry }, place) => (tops[place] ?? 0) - entry.wanted), runs };
}

/** Crowds with a member too far from its line, the worst first. */
function farCrowds({ runs, displaced }: Margin, foldBeyond: number): [number, number][] {
	return runs
		.map((run) => ({
			run,
			farthest: Math.max(...displaced.slice(run[0], run[1] + 1).map(Math.abs))
		}))
		.filter(({ farthest }) => farthest > foldBeyond)
		.sort((a, b) => b.farthest - a.farthest)
		.map(({ run }) => run);
}

function unfoldWhatFits(
	order: readonly LevelEntry[],
	forms: Form[],
	rules: LevelRules,
	folded: Margin
): Margin {
	let margin = folded;
	const far = farCrowds(margin, rules.foldBeyond).length;
	const lines = order
		.flatMap((entry, index) => (forms[index] === 'line' ? [{ entry, index }] : []))
		.sort((a, b) => b.entry.urgency - a.entry.urgency || a.entry.age - b.entry.age || a.index - b.index);
	for (const { index } of lines) {
		forms[index] = 'full';
		const tried = standing(order, forms, rules);
		const place = tried.shown.findIndex((member) => member.index === index);
		const crowds = farCrowds(tried, rules.foldBeyond);
		const crowded = crowds.some(([first, last]) => first <= place && place <= last);
		if (crowded || crowds.length > far) forms[index] = 'line';
		else margin = tried;
	}
	return margin;
}

/** Folds the least urgent, youngest whole entry of a crowd; false when none can fold. */
function foldOne(members: readonly Member[], forms: Form[], rules: LevelRules): boolean {
	const candidates = members
		.filter(({ entry, index }) => forms[index] === 'full' && !entry.active && !entry.opened)
		.filter(({ entry }) => entry.height > rules.lineHeight)
		.sort((a, b) => a.entry.urgency - b.entry.urgency || b.entry.age - a.entry.age || b.index - a.index);
	const chosen = candidates[0];
	if (chosen === undefined) return false;
	forms[chosen.index] = 'line';
	return true;
}

/**
 * Lets one entry speak for one more of its block: the least urgent line of the block that has most of them goes to
 * the speaker that is there, or to the next least urgent line. False when no block has two.
 */
function gatherOne(members: readonly Member[], forms: Form[], more: number[]): boolean {
	const blocks = new Map<string, Member[]>();
	for (const member of members) {
		const { entry, index } = member;
		if (entry.active || entry.opened || forms[index] === 'hidden') continue;
		blocks.set(entry.block, [...(blocks.get(entry.block) ?? []), member]);
	}
	const largest = [...blocks.values()]
		.filter((group) => group.length > 1)
		.sort((a, b) => b.length - a.length || (a[0]?.index ?? 0) - (b[0]?.index ?? 0))[0];
	if (largest === undefined) return false;
	const present = largest.filter(({ index }) => forms[index] === 'gathered');
	const lines = largest
		.filter(({ index }) => forms[index] !== 'gathered')
		.sort((a, b) => a.entry.urgency - b.entry.urgency || b.entry.age - a.entry.age || b.index - a.index);
	const [speaker, other] = [...present, ...lines]
		.slice(0, 2)
		.sort(
			(a, b) =>
				Number(forms[b.index] === 'gathered') - Number(forms[a.index] === 'gathered') || a.index - b.index
		);
	if (speaker === undefined || other === undefined) return false;
	forms[speaker.index] = 'gathered';
	forms[other.index] = 'hidden';
	more[speaker.index] = (more[speaker.index] ?? 1) + (more[other.index] ?? 1);
	return true;
}
