import { v7 as uuidv7 } from 'uuid';
import type { marking as contracts } from '$lib/contracts';
import type { MarkingState, RemarkAnchor } from '$lib/contracts/marking';
import { ApiProblem, request, Unreachable } from './api';
import { enqueue, levelsWith, remarksWith, stillApplies, type Words, type Write } from './marking-queue';
import { loadQueue, saveQueue } from './marking-store';

export type MarkingStatus =
	/** not begun by anybody yet: the first act begins it */
	| 'unopened'
	| 'opening'
	| 'stored'
	| 'storing'
	| 'offline'
	/** something that is unsent was changed elsewhere: a choice is asked */
	| 'conflict'
	/** the server does not take it: finished, returned, no longer one's own */
	| 'refused';

type Next = { alias: string; label: string } | null;

/** Pauses between tries while the network is away, ms. */
const pauses = [2_000, 5_000, 15_000, 30_000];

/**
 * A marking under a grader's hand. Acts show at once, wait in a queue that outlives the page, and go out one at a time, each
 * naming the revision it saw; ids of remarks are made here, so that an unanswered one may be sent again.
 */
export class Marking {
	state: MarkingState | null = $state.raw(null);
	status: MarkingStatus = $state('unopened');
	/** why the server refused, in its own words */
	refusal: string | null = $state(null);
	/** what to mark instead, when somebody else has this one */
	instead: Next = $state(null);
	/** ms since 1970 */
	storedAt: number | null = $state(null);

	#queue: Write[] = $state.raw([]);
	#inFlight = 0;
	#turn = 0;
	#timer: ReturnType<typeof setTimeout> | undefined;
	readonly #person: string;
	#alias: string;
	#running: Promise<void> | null = null;

	/** What is unsent and speaks of something that was changed elsewhere. */
	readonly disputed = $derived(
		this.status === 'conflict'
			? this.#queue.filter((write) => !this.state || !stillApplies(write, this.state))
			: []
	);
	/** While a choice is asked, what is disputed shows as the server has it. */
	readonly #shown = $derived(this.#queue.filter((write) => !this.disputed.includes(write)));
	readonly levels = $derived(this.state ? levelsWith(this.state, this.#shown) : {});
	readonly remarks = $derived(
		this.state ? remarksWith(this.state, this.#shown, this.state.remarks.at(-1)?.at ?? '') : []
	);
	readonly unsent = $derived(this.#queue.length);
	readonly readonly = $derived(
		this.state === null || this.state.finishedAt !== null || this.state.returned || this.status === 'refused'
	);

	/** `person` is the id of the marker: what is unsent here is theirs alone. */
	constructor(person: string, alias: string, state: MarkingState | null) {
		this.#person = person;
		this.#alias = alias;
		this.state = state;
		this.status = state ? 'stored' : 'unopened';
	}

	/** Takes up what an earlier visit left unsent, begins the marking if need be, and listens for the network. */
	start(): () => void {
		const again = () => {
			this.#turn = 0;
			void this.#run();
		};
		window.addEventListener('online', again);
		void this.#open().then(() => {
			if (!this.state) return;
			this.#queue = loadQueue(this.#person, this.state.id);
			if (this.#queue.length > 0) void this.#run();
		});
		return () => {
			window.removeEventListener('online', again);
			clearTimeout(this.#timer);
		};
	}

	async #open(): Promise<void> {
		if (this.state) return;
		this.status = 'opening';
		try {
			this.state = await request<typeof contracts.openMarking>('POST', '/markings', {
				body: { alias: this.#alias }
			});
			this.status = 'stored';
		} catch (thrown) {
			this.status = thrown instanceof Unreachable ? 'offline' : 'refused';
			this.refusal = thrown instanceof Error ? thrown.message : String(thrown);
			if (thrown instanceof ApiProblem) this.instead = (thrown.details as { next?: Next }).next ?? null;
			if (thrown instanceof Unreachable) this.#later(() => void this.#open());
		}
	}

	setLevel(criterion: string, level: number | null): void {
		this.#add({ kind: 'level', criterion, level, was: this.levels[criterion] ?? null });
	}

	addRemark(words: Words, anchor: RemarkAnchor): string {
		const remark = uuidv7();
		this.#add({ kind: 'add', remark, words, anchor });
		return remark;
	}

	reviseRemark(remark: string, words: Words): void {
		this.#add({ kind: 'revise', remark, words, was: this.#wordsOf(remark) });
	}

	deleteRemark(remark: string): void {
		this.#add({ kind: 'delete', remark, was: this.#wordsOf(remark) });
	}

	#wordsOf(remark: string): Words | null {
		const known = this.remarks.find((one) => one.id === remark);
		return known ? { kind: known.kind, body: known.body } : null;
	}

	#add(write: Write): void {
		if (!this.state || this.readonly) return;
		this.#keep(enqueue(this.#queue, write, this.#inFlight));
		if (this.status === 'stored' || this.status === 'storing') void this.#run();
	}

	#keep(queue: Write[]): void {
		this.#queue = queue;
		if (this.state) saveQueue(this.#person, { ...this.state, href: location.pathname }, queue);
	}

	/** Resolves when everything is stored; false when it could not be. */
	async settle(): Promise<boolean> {
		await this.#run();
		return this.#queue.length === 0 && this.status === 'stored';
	}

	#run(): Promise<void> {
		this.#running ??= this.#drain().finally(() => (this.#running = null));
		return this.#running;
	}

	async #drain(): Promise<void> {
		clearTimeout(this.#timer);
		while (this.state && this.#queue.length > 0) {
			const write = this.#queue[0];
			if (!write) return;
			this.status = 'storing';
			this.#inFlight = 1;
			try {
				this.state = await send(this.state, write);
				this.#keep(this.#queue.slice(1));
				this.#turn = 0;
			} catch (thrown) {
				if (!(await this.#refused(thrown, write))) return;
			} finally {
				this.#inFlight = 0;
			}
		}
		this.#stored();
	}

	#stored(): void {
		this.status = 'stored';
		this.refusal = null;
		this.storedAt = Date.now();
	}

	/** True when the queue may go on. */
	async #refused(thrown: unknown, write: Write): Promise<boolean> {
		if (thrown instanceof ApiProblem && thrown.status === 412 && this.state) {
			try {
				this.state = await reload(this.state.id);
			} catch {
				return this.#wait();
			}
			if (stillApplies(write, this.state)) return true;
			this.status = 'conflict';
			return false;
		}
		if (thrown instanceof ApiProblem && thrown.status < 500) {
			this.status = 'refused';
			this.refusal = thrown.message;
			return false;
		}
		return this.#wait();
	}

	#wait(): false {
		this.status = 'offline';
		this.#later(() => void this.#run());
		return false;
	}

	#later(then: () => void): void {
		const pause = pauses[Math.min(this.#turn++, pauses.length - 1)] ?? 30_000;
		clearTimeout(this.#timer);
		this.#timer = setTimeout(then, pause);
	}

	/** What was changed elsewhere stays; what is unsent about it is given up. */
	keepTheirs(): void {
		const { state } = this;
		if (!state) return;
		this.#keep(this.#queue.filter((write) => stillApplies(write, state)));
		this.#goOn();
	}

	/** What is unsent is stored over what was changed elsewhere; both stay in the history. */
	keepMine(): void {
		const { state } = this;
		if (!state) return;
		this.#keep(
			this.#queue.flatMap((write): Write[] => {
				if (stillApplies(write, state) || write.kind === 'add') return [write];
				if (write.kind === 'level')
					return [
						{ ...write, was: state.levels.find((row) => row.criterion === write.criterion)?.level ?? null }
					];
				const there = state.remarks.find((one) => one.id === write.remark);
				return [{ ...write, was: there ? { kind: there.kind, body: there.body } : null }];
			})
		);
		this.#goOn();
	}

	#goOn(): void {
		if (this.#queue.length > 0) void this.#run();
		else this.#stored();
	}

	/** Gives up what the server will not take. */
	dropUnsent(): void {
		this.#keep([]);
		this.#stored();
	}

	async finish(): Promise<{ next: Next } | null> {
		if (!(await this.settle()) || !this.state) return null;
		return this.#whole(async (state) => {
			const answer = await request<typeof contracts.finishMarking>('POST', '/markings/{marking}/finish', {
				params: { marking: state.id },
				revision: state.revision
			});
			this.state = answer.marking;
			return { next: answer.next };
		});
	}

	async reopen(): Promise<boolean> {
		const done = await this.#whole(async (state) => {
			this.state = await request<typeof contracts.reopenMarking>('POST', '/markings/{marking}/reopen', {
				params: { marking: state.id },
				revision: state.revision
			});
			return true;
		});
		return done ?? false;
	}

	/** One act on the whole marking. A refusal is told and changes nothing. */
	async #whole<T>(run: (state: MarkingState) => Promise<T>): Promise<T | null> {
		if (!this.state) return null;
		this.refusal = null;
		try {
			const answer = await run(this.state);
			this.#stored();
			return answer;
		} catch (thrown) {
			if (thrown instanceof ApiProblem && thrown.status === 412 && this.state)
				this.state = await reload(this.state.id);
			this.refusal = thrown instanceof Error ? thrown.message : String(thrown);
			return null;
		}
	}
}

const reload = (marking: string) =>
	request<typeof contracts.readMarking>('GET', '/markings/{marking}', { params: { marking } });

function send(state: MarkingState, write: Write): Promise<MarkingState> {
	const { revision } = state;
	switch (write.kind) {
		case 'level':
			return request<typeof contracts.setLevel>('PUT', '/markings/{marking}/levels/{criterion}', {
				params: { marking: state.id, criterion: write.criterion },
				body: { level: write.level },
				revision
			});
		case 'add':
			return request<typeof contracts.addRemark>('PUT', '/markings/{marking}/remarks/{remark}', {
				params: { marking: state.id, remark: write.remark },
				body: { ...write.words, anchor: write.anchor },
				revision
			});
		case 'revise':
			return request<typeof contracts.reviseRemark>('PATCH', '/remarks/{remark}', {
				params: { remark: write.remark },
				body: write.words,
				revision
			});
		case 'delete':
			return request<typeof contracts.deleteRemark>('DELETE', '/remarks/{remark}', {
				params: { remark: write.remark },
				revision
			});
	}
}
