/** Something the reader of the terminal can act on: shown as it is, without a stack. */
export class StartProblem extends Error {
	/** @param {string} message what is so, then what to do */
	constructor(message) {
		super(message);
		this.name = 'StartProblem';
	}
}
