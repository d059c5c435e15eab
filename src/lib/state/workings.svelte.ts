import { Evaluator, type Evaluation, type Readings, type Worksheet } from '$lib/worksheets';

/** Up to this long an evaluation runs between two key strokes without being felt, ms. */
const unfelt = 12;
const longestPause = 1_500;

/**
 * What the readings give, kept up while they are typed: by the same code as on the server, which has the last word.
 * Small tables are evaluated at once; where it takes longer, when the hand rests.
 */
export class Workings {
	readonly worksheet: Worksheet;
	evaluation: Evaluation = $state.raw() as Evaluation;
	/** Kept from edit to edit, so that each computes only what it touches. */
	readonly #evaluator: Evaluator;
	#took = 0;
	#timer: ReturnType<typeof setTimeout> | null = null;

	constructor(worksheet: Worksheet, readings: Readings) {
		this.worksheet = worksheet;
		this.#evaluator = new Evaluator(worksheet);
		this.evaluation = this.#evaluate(readings);
	}

	/** Sample calculations with rows chosen by table name, of the evaluation there is. */
	ofRows(chosen: Readonly<Record<string, string>>): Evaluation['workings'] {
		return this.#evaluator.workings(chosen);
	}

	follow(readings: Readings): void {
		if (this.#timer) clearTimeout(this.#timer);
		this.#timer = null;
		if (this.#took <= unfelt) {
			this.evaluation = this.#evaluate(readings);
			return;
		}
		this.#timer = setTimeout(
			() => {
				this.#timer = null;
				this.evaluation = this.#evaluate(readings);
			},
			Math.min(longestPause, 3 * this.#took)
		);
	}

	destroy(): void {
		if (this.#timer) clearTimeout(this.#timer);
	}

	#evaluate(readings: Readings): Evaluation {
		const from = performance.now();
		const evaluation = this.#evaluator.evaluate(readings);
		this.#took = performance.now() - from;
		return evaluation;
	}
}
