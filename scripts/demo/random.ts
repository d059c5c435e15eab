/**
 * Small seeded generator (mulberry32) so that the demo is the same on every machine; of use for nothing else.
 * Method: public-domain algorithm, from memory.
 */
export function seededRandom(seed: number) {
	let state = seed >>> 0;
	const uniform = () => {
		state = (state + 0x6d2b79f5) >>> 0;
		let t = state;
		t = Math.imul(t ^ (t >>> 15), t | 1);
		t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
		return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
	};
	/** Box-Muller */
	const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
	const pick = <T>(items: readonly T[]): T => {
		const item = items[Math.floor(uniform() * items.length)];
		if (item === undefined) throw new RangeError('nothing to pick from');
		return item;
	};
	return { uniform, normal, pick };
}

export type SeededRandom = ReturnType<typeof seededRandom>;
