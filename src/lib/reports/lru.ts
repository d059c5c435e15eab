/** Keeps the most recently used values. A memo of pure functions only, so that what it forgets is computed again. */
export class Lru<Value> {
	private readonly entries = new Map<string, Value>();

	constructor(private readonly capacity: number) {}

	get size(): number {
		return this.entries.size;
	}

	/** The kept value, or the computed one, kept from now on. */
	take(key: string, compute: () => Value): Value {
		const kept = this.entries.get(key);
		if (kept !== undefined) {
			this.entries.delete(key);
			this.entries.set(key, kept);
			return kept;
		}
		const value = compute();
		this.entries.set(key, value);
		if (this.entries.size > this.capacity) {
			const oldest = this.entries.keys().next();
			if (!oldest.done) this.entries.delete(oldest.value);
		}
		return value;
	}
}
