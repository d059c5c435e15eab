import { SvelteSet } from 'svelte/reactivity';
import { v7 as uuidv7 } from 'uuid';
import type { moderation as contracts } from '$lib/contracts';
import type { ReturningReport, ReturningShape } from '$lib/contracts/moderation';
import { request } from './api';

/** An instructor's batch: which reports are chosen, returning them, and taking that back. */
export class ReturnBatch {
	shown: ReturningShape = $state.raw({ zone: 'UTC', assignments: [], reports: [] });
	busy = $state(false);
	/** why the last act was refused; nothing of it was done */
	refusal: string | null = $state(null);
	readonly #chosen = new SvelteSet<string>();
	/** one key for one batch: an unanswered return may be asked again and happens once */
	#key = uuidv7();

	constructor(
		private readonly course: string,
		shown: ReturningShape
	) {
		this.shown = shown;
	}

	has = (id: string): boolean => this.#chosen.has(id);
	readonly chosen = $derived(
		this.shown.reports.filter((report) => report.state === 'ready' && this.#chosen.has(report.id))
	);

	choose(reports: readonly ReturningReport[], wanted: boolean): void {
		for (const { id, state } of reports) {
			if (state !== 'ready') continue;
			if (wanted) this.#chosen.add(id);
			else this.#chosen.delete(id);
		}
		this.#key = uuidv7();
	}

	/** Returns what is chosen; null when refused. */
	async giveBack(): Promise<{ reports: string[]; students: number; undoUntil: string } | null> {
		return this.#act(async () => {
			const answer = await request<typeof contracts.returnReports>('POST', '/returning/{course}', {
				params: { course: this.course },
				body: { reports: this.chosen.map((report) => report.id) },
				idempotencyKey: this.#key
			});
			this.#chosen.clear();
			return { reports: answer.returned, students: answer.students, undoUntil: answer.undoUntil };
		});
	}

	async takeBack(reports: readonly string[]): Promise<boolean> {
		const done = await this.#act(async () => {
			await request<typeof contracts.withdrawReturn>('POST', '/returning/{course}/withdrawals', {
				params: { course: this.course },
				body: { reports: [...reports] },
				idempotencyKey: uuidv7()
			});
			return true;
		});
		return done ?? false;
	}

	async #act<T>(run: () => Promise<T>): Promise<T | null> {
		this.busy = true;
		this.refusal = null;
		try {
			const answer = await run();
			this.#key = uuidv7();
			return answer;
		} catch (thrown) {
			this.refusal = thrown instanceof Error ? thrown.message : String(thrown);
			return null;
		} finally {
			await this.#read();
			this.busy = false;
		}
	}

	/** The list as it is now; when it cannot be had, the one shown stays. */
	async #read(): Promise<void> {
		try {
			this.shown = await request<typeof contracts.readReturning>('GET', '/returning/{course}', {
				params: { course: this.course }
			});
		} catch {
			return;
		}
	}
}
