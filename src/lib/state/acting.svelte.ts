import { ApiProblem } from './api';

/** One act of a page at a time: what is waited for, and what the server said against it. */
export class Acting {
	/** label of the act under way: "Storing…" */
	waiting = $state<string | null>(null);
	problem = $state<string | null>(null);
	/** field -> what is wrong there */
	fields = $state<Record<string, string>>({});

	/** Runs a change; true when it was made. What the server refuses is kept for the page to show. */
	async run(label: string, change: () => Promise<void>): Promise<boolean> {
		if (this.waiting) return false;
		this.waiting = label;
		this.problem = null;
		this.fields = {};
		try {
			await change();
			return true;
		} catch (thrown) {
			if (thrown instanceof ApiProblem) {
				this.problem = thrown.details.detail ?? thrown.details.title;
				this.fields = thrown.details.fields ?? {};
			} else this.problem = 'The server did not answer. Try again in a moment.';
			return false;
		} finally {
			this.waiting = null;
		}
	}

	/** The label while that very act is under way, for its button. */
	busy(label: string): string | null {
		return this.waiting === label ? label : null;
	}
}
