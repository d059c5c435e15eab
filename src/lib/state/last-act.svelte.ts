/** What the line at the foot of a sheet says: the last act, and how to take it back. It stays until the next one. */
export class LastAct {
	text = $state('');
	state: 'kept' | 'sending' | 'waiting' | 'stopped' = $state('kept');
	undo: (() => void) | null = $state.raw(null);
	undoUntil: string | undefined = $state();

	constructor(text = '') {
		this.text = text;
	}

	/** "Stored 14:32." */
	kept(text: string, undo: (() => void | Promise<void>) | null = null, undoUntil?: string): void {
		this.#say('kept', text);
		if (undo === null) return;
		this.undoUntil = undoUntil;
		this.undo = () => {
			// Once taken back it cannot be taken back again; whoever undoes says what came of it.
			this.undo = null;
			this.undoUntil = undefined;
			void undo();
		};
	}

	/** "Storing…" */
	sending(text: string): void {
		this.#say('sending', text);
	}

	/** "Offline. 3 readings are on this device only." */
	waiting(text: string): void {
		this.#say('waiting', text);
	}

	/** "Not stored: the row was sealed at 15:04. Amend it instead." */
	stopped(text: string): void {
		this.#say('stopped', text);
	}

	#say(state: LastAct['state'], text: string): void {
		this.state = state;
		this.text = text;
		this.undo = null;
		this.undoUntil = undefined;
	}
}
