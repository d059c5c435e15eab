import type { Completion, CompletionContext, CompletionResult } from '@codemirror/autocomplete';
import type { EditorView } from '@codemirror/view';
import { suggestForNumber, suggestLinks, type LinkSuggestion } from '$lib/reports';
import type { Evaluation } from '$lib/worksheets';

/** What is offered at a place of the text, and from where on it replaces what stands there. */
export interface Offer {
	/** UTF-16 offset in the line */
	from: number;
	links: LinkSuggestion[];
	/** a begun directive is completed by its name; a number is asked about */
	manner: 'name' | 'link' | 'question';
}

const begun = /:{1,2}(value|figure|table|workings|comparison)\[([^\]]*)$/;
/** A number with what may be its uncertainty and unit; looked for at the end of what is typed. */
const number =
	/(?<![\w.])[-\u2212+]?\d[\d.,]*(?:\(\d+\))?(?:\s?\u00b1\s?[\d.]+)?(?:[\s\u00a0\u2009]?[^\s\d.,;:()[\]$*]{1,12})?$/;

/**
 * Links that fit before the cursor. `asked`: the writer wants to see them; otherwise only a begun directive, or a number
 * that the workings know, is answered.
 */
export function offerLinks(evaluation: Evaluation | null, before: string, asked: boolean): Offer | null {
	if (!evaluation) return null;
	const directive = begun.exec(before);
	if (directive) {
		const [, kind, name = ''] = directive;
		const links = suggestLinks(evaluation, name).filter((link) => link.kind === kind);
		return links.length === 0 ? null : { from: before.length - name.length, links, manner: 'name' };
	}
	const typed = number.exec(before)?.[0];
	if (typed !== undefined && /\d/.test(typed)) {
		const links = suggestForNumber(evaluation, typed);
		if (links.length > 0) return { from: before.length - typed.length, links, manner: 'question' };
	}
	if (!asked) return null;
	const word = /[\p{L}_][\p{L}\p{N}_.]*$/u.exec(before)?.[0] ?? '';
	const named = measuredFirst(evaluation, suggestLinks(evaluation, word));
	// A word that names nothing is just the end of the sentence: everything is offered behind it.
	const from = before.length - (named.length > 0 ? word.length : 0);
	const links = named.length > 0 ? named : measuredFirst(evaluation, suggestLinks(evaluation, ''));
	return links.length === 0 ? null : { from, links, manner: 'link' };
}

/** Constants are rarely what a sentence is about: they come after everything that was found. */
function measuredFirst(evaluation: Evaluation, links: LinkSuggestion[]): LinkSuggestion[] {
	const isExact = ({ kind, name }: LinkSuggestion) =>
		kind === 'value' && evaluation.quantities[name]?.standardUncertainty === null;
	return [...links.filter((link) => !isExact(link)), ...links.filter(isExact)];
}

/** The directive as it is put into the text: what is placed gets a line of its own. */
export function directiveFor(link: LinkSuggestion, lineBefore: string, lineAfter: string): string {
	if (link.kind === 'value') return link.insert;
	const lead = lineBefore.trim() === '' ? '' : '\n\n';
	const tail = lineAfter.trim() === '' ? '' : '\n\n';
	return `${lead}${link.insert}${tail}`;
}

/** Completion of the editor, over whatever the workings give at that moment. */
export function linkCompletion(evaluation: () => Evaluation | null) {
	return (context: CompletionContext): CompletionResult | null => {
		const line = context.state.doc.lineAt(context.pos);
		const before = line.text.slice(0, context.pos - line.from);
		const offer = offerLinks(evaluation(), before, context.explicit);
		if (!offer) return null;
		const { manner } = offer;
		return {
			from: line.from + offer.from,
			filter: false,
			options: offer.links.map((link) => ({
				label: manner === 'question' ? `Link to ${link.name}?` : link.name,
				detail: link.display === link.label ? link.label : `${link.display}, ${link.label}`,
				apply: (view: EditorView, _completion: Completion, from: number, to: number) =>
					put(view, link, manner, from, to)
			}))
		};
	};
}

function put(
	view: EditorView,
	link: LinkSuggestion,
	manner: Offer['manner'],
	from: number,
	to: number
): void {
	const line = view.state.doc.lineAt(from);
	const after = line.text.slice(to - line.from);
	const closed = after.startsWith(']');
	const insert =
		manner === 'name'
			? `${link.name}${closed ? '' : ']'}`
			: directiveFor(link, line.text.slice(0, from - line.from), after);
	const anchor = from + insert.length + (manner === 'name' && closed ? 1 : 0);
	view.dispatch({ changes: { from, to, insert }, selection: { anchor }, userEvent: 'input.complete' });
}
