import * as Y from 'yjs';

export interface AppendQueueOptions {
	/** Puts one edit into the log. Null: refused for good. Throws when it may succeed later. */
	append(userId: string, bytes: Uint8Array): Promise<{ seq: number } | null>;
	/** After each commit. */
	stored(seq: number): void;
	/** Once; nothing is appended afterwards. */
	refused(): void;
	/** Something went wrong and will be tried again in `delay` milliseconds. */
	retrying?(problem: unknown, delay: number): void;
	/** Milliseconds before the n-th retry, n from 0. */
	delay?(attempt: number): number;
}

const defaultDelay = (attempt: number) => Math.min(1_000, 100 * 2 ** attempt);

/**
 * Edits of one document on their way into the log: in order, one append in flight, tried again until it is committed or refused.
 * Neighbouring edits of one person that wait together become one append.
 */
export class AppendQueue {
	readonly #options: AppendQueueOptions;
	readonly #waiting: { userId: string; bytes: Uint8Array; position: number }[] = [];
	readonly #listeners: { position: number; answer: () => void }[] = [];
	#taken = 0;
	#committed = 0;
	#running = false;
	#ended = false;

	constructor(options: AppendQueueOptions) {
		this.#options = options;
	}

	/** Everything taken so far is committed. */
	get drained(): boolean {
		return this.#committed === this.#taken;
	}

	take(userId: string, bytes: Uint8Array): void {
		this.#taken += 1;
		if (this.#ended) return;
		this.#waiting.push({ userId, bytes, position: this.#taken });
		void this.#run();
	}

	/** Calls `answer` when everything taken before this moment is committed; never after a refusal. */
	barrier(answer: () => void): void {
		if (this.#ended) return;
		if (this.drained) answer();
		else this.#listeners.push({ position: this.#taken, answer });
	}

	/** Forgets what waits; no barrier is answered any more. */
	end(): void {
		this.#ended = true;
		this.#waiting.length = 0;
		this.#listeners.length = 0;
	}

	async #run(): Promise<void> {
		if (this.#running) return;
		this.#running = true;
		try {
			for (let next = this.#next(); next && !this.#ended; next = this.#next()) {
				const outcome = await this.#append(next.userId, next.bytes);
				if (this.#ended) return;
				if (!outcome) {
					this.end();
					this.#options.refused();
					return;
				}
				this.#committed = next.position;
				this.#options.stored(outcome.seq);
				while (this.#listeners[0] && this.#listeners[0].position <= this.#committed) {
					this.#listeners.shift()?.answer();
				}
			}
		} finally {
			this.#running = false;
		}
	}

	#next(): { userId: string; bytes: Uint8Array; position: number } | undefined {
		const first = this.#waiting.shift();
		if (!first) return undefined;
		const bytes = [first.bytes];
		let position = first.position;
		while (this.#waiting[0]?.userId === first.userId && bytes.length < 100) {
			const more = this.#waiting.shift();
			if (!more) break;
			bytes.push(more.bytes);
			position = more.position;
		}
		return {
			userId: first.userId,
			bytes: bytes.length === 1 ? first.bytes : Y.mergeUpdates(bytes),
			position
		};
	}

	async #append(userId: string, bytes: Uint8Array): Promise<{ seq: number } | null> {
		for (let attempt = 0; ; attempt += 1) {
			try {
				return await this.#options.append(userId, bytes);
			} catch (problem) {
				if (this.#ended) return null;
				// When the connection broke after the commit, the same edit is stored twice: merging it again changes nothing.
				const delay = (this.#options.delay ?? defaultDelay)(attempt);
				this.#options.retrying?.(problem, delay);
				await new Promise((resolve) => setTimeout(resolve, delay));
				if (this.#ended) return null;
			}
		}
	}
}
