import type { Evaluation, ShownQuantity } from '$lib/worksheets';
import type { LinkKind, PlacedKind } from './types';

/** Every link and formula is one indivisible character of the projection. */
export const objectCharacter = '\uFFFC';

export const placedKinds: readonly PlacedKind[] = ['figure', 'table', 'workings', 'comparison'];

const nouns: Record<LinkKind, { one: string; many: string }> = {
	value: { one: 'value', many: 'values' },
	figure: { one: 'figure', many: 'figures' },
	table: { one: 'table', many: 'tables' },
	workings: { one: 'sample calculation', many: 'sample calculations' },
	comparison: { one: 'comparison', many: 'comparisons' }
};

const labels: Record<PlacedKind, string> = {
	figure: 'Figure',
	table: 'Table',
	workings: 'Calculation',
	comparison: 'Comparison'
};

/** Names shown before "and 6 more". */
const namesShown = 8;

export function isPlacedKind(text: string): text is PlacedKind {
	return (placedKinds as readonly string[]).includes(text);
}

/** 'Figure 2'; without a number 'Figure'. */
export function placedLabel(kind: PlacedKind, number: number | undefined): string {
	return number === undefined ? labels[kind] : `${labels[kind]} ${number}`;
}

/** Every value that can be linked: results, and the slope and intercept of each fit as 'line.slope'. */
export function linkableValues(evaluation: Evaluation): Map<string, ShownQuantity> {
	const values = new Map(Object.entries(evaluation.quantities));
	for (const [fit, shown] of Object.entries(evaluation.fits)) {
		for (const part of ['slope', 'intercept'] as const) {
			const name = `${fit}.${part}`;
			if (!values.has(name)) values.set(name, shown.parameters[part]);
		}
	}
	return values;
}

export function namesOf(evaluation: Evaluation, kind: LinkKind): string[] {
	if (kind === 'value') return [...linkableValues(evaluation).keys()];
	return Object.keys(placedOf(evaluation, kind));
}

export function isKnown(evaluation: Evaluation | null, kind: LinkKind, name: string): boolean {
	if (evaluation === null) return false;
	return kind === 'value'
		? linkableValues(evaluation).has(name)
		: Object.hasOwn(placedOf(evaluation, kind), name);
}

export interface UnknownLink {
	message: string;
	nearest: string | null;
}

/** What to tell about a name that the evaluation does not know. */
export function explainUnknown(evaluation: Evaluation | null, kind: LinkKind, name: string): UnknownLink {
	const noun = nouns[kind];
	if (evaluation === null) {
		return { message: `${name}: shown when the readings are worked up.`, nearest: null };
	}
	const names = namesOf(evaluation, kind);
	const missing = name === '' ? `This link names no ${noun.one}.` : `No ${noun.one} named ${name}.`;
	if (names.length === 0) return { message: `${missing} There are no ${noun.many} yet.`, nearest: null };
	const nearest = nearestName(name, names);
	const parts = [missing];
	const elsewhere = otherKind(evaluation, kind, name);
	if (elsewhere) parts.push(elsewhere);
	if (nearest !== null && names.length > 1) parts.push(`Nearest: ${nearest}.`);
	parts.push(`There ${names.length === 1 ? 'is' : 'are'}: ${listed(names)}.`);
	return { message: parts.join(' '), nearest };
}

function listed(names: string[]): string {
	if (names.length <= namesShown) return names.join(', ');
	return `${names.slice(0, namesShown).join(', ')} and ${names.length - namesShown} more`;
}

function otherKind(evaluation: Evaluation, kind: LinkKind, name: string): string | null {
	for (const other of ['value', ...placedKinds] as const) {
		if (other === kind || !isKnown(evaluation, other, name)) continue;
		const written =
			other === 'value' ? `:value[${name}] in a sentence` : `::${other}[${name}] on its own line`;
		return `There is a ${nouns[other].one} of that name: ${written}.`;
	}
	return null;
}

function placedOf(evaluation: Evaluation, kind: PlacedKind): Record<string, unknown> {
	switch (kind) {
		case 'figure':
			return evaluation.figures;
		case 'table':
			return evaluation.tables;
		case 'workings':
			return evaluation.workings;
		case 'comparison':
			return evaluation.comparisons;
	}
}

/** The name that was probably meant: same letters and digits first, then the smallest edit distance up to a third of the length. */
export function nearestName(wanted: string, names: readonly string[]): string | null {
	const plain = plainName(wanted);
	if (plain === '' || plain.length > 60) return null;
	let nearest: string | null = null;
	let smallest = Math.floor(plain.length / 3) + 1;
	for (const name of names) {
		const distance = editDistance(plain, plainName(name));
		if (distance < smallest) {
			smallest = distance;
			nearest = name;
		}
	}
	return nearest;
}

function plainName(name: string): string {
	return name.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '');
}

function editDistance(a: string, b: string): number {
	let previous = Array.from({ length: b.length + 1 }, (_, index) => index);
	for (let row = 1; row <= a.length; row += 1) {
		const current = [row];
		for (let column = 1; column <= b.length; column += 1) {
			const replaced = (previous[column - 1] ?? 0) + (a[row - 1] === b[column - 1] ? 0 : 1);
			current.push(Math.min(replaced, (previous[column] ?? 0) + 1, (current[column - 1] ?? 0) + 1));
		}
		previous = current;
	}
	return previous[b.length] ?? 0;
}
