import type { Evaluation, ShownComparison } from '$lib/worksheets';
import { compareStated } from './compare';
import { offeredValues } from './links';
import type { LinkKind } from './types';

/** One line of the editor's completion. */
export interface LinkSuggestion {
	kind: LinkKind;
	name: string;
	label: string;
	/** what the link would show: '41.6(6) kJ/mol', for placed things their caption */
	display: string;
	/** the directive, ':value[H_vap]' */
	insert: string;
}

/**
 * What can be linked, best first: names that begin as typed, then labels with a word that does, then names that hold
 * it. An empty prefix gives everything, values first.
 */
export function suggestLinks(evaluation: Evaluation, prefix: string): LinkSuggestion[] {
	const wanted = prefix.trim().toLowerCase();
	return allLinks(evaluation)
		.map((suggestion, index) => ({ suggestion, index, rank: rankOf(suggestion, wanted) }))
		.filter(({ rank }) => rank !== null)
		.sort((a, b) => (a.rank ?? 0) - (b.rank ?? 0) || a.index - b.index)
		.map(({ suggestion }) => suggestion);
}

/** The values that a typed number with its unit states exactly as the workings do, rounding apart: "Link to ...?" */
export function suggestForNumber(evaluation: Evaluation, typed: string): LinkSuggestion[] {
	const names = new Set(
		compareStated(typed, evaluation, 1)
			.filter((line) => line.kind === 'typed' && line.agrees)
			.map((line) => line.name)
	);
	return allLinks(evaluation).filter(({ kind, name }) => kind === 'value' && names.has(name));
}

function allLinks(evaluation: Evaluation): LinkSuggestion[] {
	const placed = (kind: Exclude<LinkKind, 'value'>, name: string, label: string): LinkSuggestion => ({
		kind,
		name,
		label,
		display: label,
		insert: `::${kind}[${name}]`
	});
	return [
		...offeredValues(evaluation).map(([name, quantity]): LinkSuggestion => ({
			kind: 'value',
			name,
			label: quantity.label,
			display: quantity.display.text,
			insert: `:value[${name}]`
		})),
		...Object.entries(evaluation.figures).map(([name, figure]) => placed('figure', name, figure.caption)),
		...Object.entries(evaluation.tables).map(([name, table]) => placed('table', name, table.caption)),
		...Object.entries(evaluation.workings).map(([name, sample]) => placed('workings', name, sample.title)),
		...Object.entries(evaluation.comparisons).map(([name, comparison]) =>
			placed('comparison', name, comparedLabel(evaluation, name, comparison))
		)
	];
}

/** 'Heat capacity ratio, argon: Measured …': the sentence alone does not say of what. */
function comparedLabel(
	{ quantities }: Evaluation,
	name: string,
	{ quantity, sentence, group }: ShownComparison
): string {
	const key = group === undefined ? '' : name.slice(name.lastIndexOf('.'));
	const label = quantities[`${quantity}${key}`]?.label;
	return label === undefined ? sentence : `${label}: ${sentence}`;
}

function rankOf({ name, label }: LinkSuggestion, wanted: string): number | null {
	const lower = name.toLowerCase();
	if (lower.startsWith(wanted)) return 0;
	if (
		label
			.toLowerCase()
			.split(/[^\p{L}\p{N}]+/u)
			.some((word) => word.startsWith(wanted))
	)
		return 1;
	return lower.includes(wanted) || lower.replace(/[^\p{L}\p{N}]/gu, '').startsWith(wanted) ? 2 : null;
}
