import {
	checkReport,
	countWords,
	numberPlacements,
	renderSection,
	shownResults,
	type Check,
	type Numbering,
	type RenderedSection,
	type ShownResult
} from '$lib/reports';
import type { reports } from '$lib/contracts';
import { Evaluator, type Evaluation, type Readings, type Worksheet } from '$lib/worksheets';

/** A section as the sheet draws it. */
export interface DrawnSection {
	position: number;
	key: string;
	title: string;
	owner: 'author' | 'team';
	text: string;
	words: number;
	rendered: RenderedSection;
	checks: Check[];
}

/**
 * A report as it stands: texts, readings, and all that follows from them. The same on the server, where it is made from
 * what is stored, and in the browser, where live documents change the texts and readings.
 */
export class ReportSheet {
	readonly worksheet: Worksheet;
	readonly #outline: reports.SectionDocument[];
	#texts: Record<string, string> = $state({});
	readings: Readings = $state.raw({ parameters: {}, tables: {} });
	/** made with the first evaluation, and kept for the next ones */
	#evaluator: Evaluator | null = null;
	#last: { readings: Readings; evaluation: Evaluation } | null = null;

	readonly evaluation: Evaluation = $derived.by(() => this.#worked(this.readings));
	readonly #sources: string[] = $derived.by(() => this.#outline.map(({ key }) => this.#texts[key] ?? ''));
	readonly numbering: Numbering = $derived(numberPlacements(this.#sources));
	readonly #checks: Check[][] = $derived.by(() =>
		checkReport(
			this.#outline.map(({ key }, index) => ({ key, source: this.#sources[index] ?? '' })),
			this.evaluation
		)
	);
	readonly sections: DrawnSection[] = $derived.by(() =>
		this.#outline.map(({ position, key, title, owner }, index) => {
			const text = this.#sources[index] ?? '';
			const { evaluation, numbering } = this;
			const rendered = renderSection(text, { evaluation, numbering, sectionNumber: position });
			const checks = this.#checks[index] ?? [];
			return { position, key, title, owner, text, words: countWords(text), rendered, checks };
		})
	);

	constructor(outline: reports.SectionDocument[], worksheet: Worksheet, readings: Readings) {
		this.#outline = outline;
		this.worksheet = worksheet;
		this.readings = readings;
		this.#texts = Object.fromEntries(outline.map(({ key, text }) => [key, text]));
	}

	/** On the server nothing derived is kept, and the same evaluation is asked for several times. */
	#worked(readings: Readings): Evaluation {
		if (this.#last?.readings !== readings) {
			this.#evaluator ??= new Evaluator(this.worksheet);
			this.#last = { readings, evaluation: this.#evaluator.evaluate(readings) };
		}
		return this.#last.evaluation;
	}

	textOf(key: string): string {
		return this.#texts[key] ?? '';
	}

	setText(key: string, text: string): void {
		if (this.#texts[key] !== text) this.#texts[key] = text;
	}

	/** What is sent with a hand-in: the values as they are shown here. */
	get results(): Record<string, ShownResult> {
		return shownResults(this.evaluation);
	}

	/** Checks that do not hold, over all sections. */
	get unmet(): number {
		return this.sections.reduce((sum, { checks }) => sum + checks.filter(({ met }) => !met).length, 0);
	}
}
