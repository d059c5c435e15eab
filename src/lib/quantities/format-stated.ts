import { formatPlusMinus, formatQuantity, withMinus, type DisplayForms } from './format';
import { roundToDigits, roundToUncertainty } from './rounding';
import { standardOf, type StatedUncertainty } from './stated-kind';
import type { Unit } from './units';

/** An uncertainty whose kind is known. */
export type KnownUncertainty = Exclude<StatedUncertainty, { kind: 'not-stated' }>;

/**
 * A value at its first use, with the kind of its uncertainty in words: '41.6(6) kJ/mol, standard uncertainty',
 * '(41.6 ± 1.4) kJ/mol, expanded uncertainty, k = 2.31, ν = 8, 95 %'. `parseStated` reads text and KaTeX back. Digits in
 * parentheses are for standard uncertainties alone, so an expanded one always has its plus-minus.
 */
export function formatStated(
	value: number,
	stated: KnownUncertainty,
	unit: Unit,
	style: 'parentheses' | 'plus-minus' = 'plus-minus'
): DisplayForms {
	const inParentheses = style === 'parentheses' && stated.kind === 'standard';
	const forms = inParentheses
		? formatQuantity(value, standardOf(stated), unit)
		: formatPlusMinus(value, stated.size, unit);
	// below the last digit that a number carries there is nothing to show, and nothing to name
	if (roundToUncertainty(value, stated.size).uncertainty === null) return forms;
	const kind = describeUncertainty(stated);
	// the spoken form of digits in parentheses names their kind already
	const speech = inParentheses ? forms.speech : `${forms.speech}, ${kind.speech}`;
	return {
		text: `${forms.text}, ${kind.text}`,
		tex: `${forms.tex},\\ ${kind.tex}`,
		html: `${forms.html}, ${kind.html}`,
		speech
	};
}

/** The kind of an uncertainty in words, with coverage factor, degrees of freedom and coverage where they are known. */
export function describeUncertainty(stated: KnownUncertainty): DisplayForms {
	if (stated.kind === 'standard') {
		const words = 'standard uncertainty';
		return { text: words, tex: `\\text{${words}}`, html: words, speech: words };
	}
	const { coverageFactor, degreesOfFreedom, coverage } = stated;
	const k = coverageFactor === null ? null : coverageFactor.toFixed(2);
	const freedom = degreesOfFreedom === null ? null : freedomText(degreesOfFreedom);
	const percent = coverage === null ? null : roundToDigits(coverage * 100, 4).mantissa;
	const words = 'expanded uncertainty';
	const join = (...parts: (string | null)[]) => parts.filter((part) => part !== null);
	return {
		text: join(words, k && `k = ${k}`, freedom && `ν = ${freedom}`, percent && `${percent} %`).join(', '),
		tex: join(
			`\\text{${words}}`,
			k && `k = ${k}`,
			freedom && `\\nu = ${freedom === '∞' ? '\\infty' : freedom}`,
			percent && `${percent}~\\%`
		).join(',\\ '),
		html: join(
			words,
			k && `<i>k</i> = ${k}`,
			freedom && `<i>ν</i> = ${freedom}`,
			percent && `${percent}\u2009%`
		).join(', '),
		speech: join(
			words,
			k && `coverage factor ${k}`,
			freedom && `${freedom === '∞' ? 'infinitely many' : freedom} degrees of freedom`,
			percent && `coverage ${percent} per cent`
		).join(', ')
	};
}

/** Effective degrees of freedom are fractional and used as they are; one decimal shows that. */
function freedomText(degreesOfFreedom: number): string {
	if (degreesOfFreedom === Infinity || degreesOfFreedom >= 1e5) return '∞';
	return withMinus(
		degreesOfFreedom.toFixed(Number.isInteger(degreesOfFreedom) || degreesOfFreedom >= 100 ? 0 : 1)
	);
}
