import type { reports } from '$lib/contracts';
import { engineVersion } from '$lib/worksheets';
import type { ResultDifference } from '$lib/reports';
import { ApiProblem, request, Unreachable } from './api';
import type { ReportSheet } from './report.svelte';

/** Why a hand-in did not happen, in words, with both sides where the values differ. */
export interface HandInProblem {
	message: string;
	differences: ResultDifference[];
	/** the same request may be repeated as it is */
	again: boolean;
}

/**
 * One hand-in from the review page. The key is made once for each wish to hand in: pressing again after a lost answer
 * gets the first one's answer, and not a second attempt.
 */
export class HandingIn {
	waiting: string | null = $state(null);
	problem: HandInProblem | null = $state.raw(null);
	done: reports.HandedIn | null = $state.raw(null);
	#key: string | null = null;

	constructor(
		readonly report: string,
		readonly sheet: ReportSheet
	) {}

	/** `stored` resolves when everything typed on this device is committed. */
	async handIn(stored: () => Promise<void>): Promise<void> {
		if (this.waiting) return;
		this.problem = null;
		this.waiting = 'Storing…';
		try {
			await stored();
			this.waiting = 'Handing in…';
			this.#key ??= crypto.randomUUID();
			this.done = await request<typeof reports.handIn>('POST', '/reports/{report}/hand-in', {
				params: { report: this.report },
				body: { engine: engineVersion, results: this.sheet.results },
				idempotencyKey: this.#key
			});
			this.#key = null;
		} catch (thrown) {
			this.problem = problemOf(thrown);
			// A refusal is final for that key; only an answer that was lost is asked for again.
			if (!(thrown instanceof Unreachable)) this.#key = null;
		} finally {
			this.waiting = null;
		}
	}
}

function problemOf(thrown: unknown): HandInProblem {
	if (thrown instanceof ApiProblem) {
		const { differences } = thrown.details as { differences?: ResultDifference[] };
		return { message: thrown.message, differences: differences ?? [], again: false };
	}
	if (thrown instanceof Unreachable) {
		const message =
			'No answer came. It may have been handed in all the same: press again, nothing is done twice.';
		return { message, differences: [], again: true };
	}
	return {
		message: 'Not handed in: this page could not send it. Load the page anew, then hand in.',
		differences: [],
		again: true
	};
}
