import { shortened, type ReadReport } from './sheet-data';

/** The selected words, as they are quoted back: code points of the section's plain text. */
export function slicePointsOf(
	report: ReadReport,
	words: { section: number; start: number; end: number }
): string {
	const text = report.projections.get(words.section)?.text ?? '';
	return shortened([...text].slice(words.start, words.end).join(''));
}
