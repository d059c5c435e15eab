import { coverageFactor } from './student';
import { decimal, numberPattern } from './number-text';

/** What a stated uncertainty is. Sizes are positive, in the unit of the value. */
export type StatedUncertainty =
	| { kind: 'standard'; size: number }
	| {
			kind: 'expanded';
			size: number;
			/** k, where it is said */
			coverageFactor: number | null;
			/** Infinity where that is said */
			degreesOfFreedom: number | null;
			/** 0.95 */
			coverage: number | null;
	  }
	/** from '1.394 ± 0.012' alone: somebody has to be asked */
	| { kind: 'not-stated'; size: number };

/** The standard uncertainty, where what is stated tells it; null where somebody has to be asked. */
export function standardOf(stated: StatedUncertainty): number | null {
	if (stated.kind === 'standard') return stated.size;
	if (stated.kind === 'not-stated') return null;
	if (stated.coverageFactor !== null) return stated.size / stated.coverageFactor;
	if (stated.coverage === null || stated.degreesOfFreedom === null) return null;
	return stated.size / coverageFactor(stated.coverage, stated.degreesOfFreedom);
}

/** What to ask about a stated uncertainty before it can be used; null where nothing is open. */
export function questionAbout(stated: StatedUncertainty): string | null {
	if (standardOf(stated) !== null) return null;
	if (stated.kind === 'expanded')
		return 'What is the coverage factor k of the expanded uncertainty? Write it behind, as in k = 2.';
	return 'What is the ±: a standard uncertainty, or an expanded one and with which k? Write it behind, as in u or k = 2.';
}

/** What the words behind a number say about its uncertainty. */
export interface Kind {
	kind: 'standard' | 'expanded' | 'not-stated';
	/** from u = 0.012 */
	size: number | null;
	coverageFactor: number | null;
	degreesOfFreedom: number | null;
	coverage: number | null;
}

export const noClause: Kind = {
	kind: 'not-stated',
	size: null,
	coverageFactor: null,
	degreesOfFreedom: null,
	coverage: null
};
export const standard: Kind = { ...noClause, kind: 'standard' };

export function ofKind(size: number, kind: Kind): StatedUncertainty {
	if (kind.kind !== 'expanded') return { kind: kind.kind, size };
	const { coverageFactor: factor, degreesOfFreedom, coverage } = kind;
	return { kind: 'expanded', size, coverageFactor: factor, degreesOfFreedom, coverage };
}

const percent = String.raw`${numberPattern}\s*%(?:\s*(?:coverage|confidence))?`;
/** A comma that separates has a space behind it, one that is a decimal sign has a digit. */
const clauseStart = new RegExp(
	String.raw`(?:[,;]\s+|\s*\(|\s+)(?=standard|expanded|[uU]\s*(?:$|[,;)(=])|(?:k|ν|nu|df)\s*=)|(?:[,;]\s+|\s*\()(?=${percent}\s*\)?$)`,
	'u'
);

/** A text without the words about its uncertainty, and these words. */
export function splitClause(text: string): { body: string; clause: string | null } {
	const start = clauseStart.exec(text);
	if (!start) return { body: text, clause: null };
	return { body: text.slice(0, start.index).trim(), clause: text.slice(start.index).trim() };
}

const piece = new RegExp(
	[
		String.raw`[,;()\s]+`,
		String.raw`(?<standard>standard(?: uncertainty)?)`,
		String.raw`(?<expanded>expanded(?: uncertainty)?)`,
		String.raw`(?<letter>[uU])(?![\p{L}\d])(?:\s*=\s*(?<size>${numberPattern}))?`,
		String.raw`k\s*=\s*(?<factor>${numberPattern})`,
		String.raw`(?:ν|nu|df)\s*=\s*(?<freedom>∞|infinity|${numberPattern})`,
		String.raw`(?<counted>${numberPattern})\s+degrees? of freedom`,
		String.raw`(?<coverage>${numberPattern})\s*%(?:\s*(?:coverage|confidence))?`
	].join('|'),
	'uy'
);

/** null where the words are others than those about an uncertainty */
export function readClause(clause: string): Kind | null {
	const kind = { ...noClause };
	piece.lastIndex = 0;
	let at = 0;
	while (at < clause.length) {
		const groups = piece.exec(clause)?.groups;
		if (!groups) return null;
		at = piece.lastIndex;
		if (groups.standard !== undefined || groups.letter === 'u') kind.kind = 'standard';
		if (groups.expanded !== undefined || groups.letter === 'U') kind.kind = 'expanded';
		if (groups.size !== undefined) kind.size = decimal(groups.size);
		if (groups.factor !== undefined) kind.coverageFactor = decimal(groups.factor);
		const freedom = groups.freedom ?? groups.counted;
		if (freedom !== undefined) kind.degreesOfFreedom = /^[∞i]/.test(freedom) ? Infinity : decimal(freedom);
		if (groups.coverage !== undefined) kind.coverage = decimal(groups.coverage) / 100;
	}
	const { coverageFactor: k, degreesOfFreedom, coverage } = kind;
	if (kind.kind === 'not-stated' && (k !== null || coverage !== null)) kind.kind = 'expanded';
	const sound =
		(k === null || k > 0) &&
		(degreesOfFreedom === null || degreesOfFreedom > 0) &&
		(coverage === null || (coverage > 0 && coverage < 1));
	return sound && !(kind.kind === 'standard' && k !== null && k !== 1) ? kind : null;
}
