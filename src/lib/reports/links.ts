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

const valuesKept = new WeakMap<Evaluation, Map<string, ShownQuantity>>();

/**
 * Every value that a link can name, in the experiment's order: 'H_vap', 'gamma.argon'. The slope and intercept of a
 * straight line are also known as 'line.slope' and 'line.intercept'.
 */
export function linkableValues(evaluation: Evaluation): ReadonlyMap<string, ShownQuantity> {
	const known = valuesKept.get(evaluation);
	if (known) return known;
	const values = new Map(Object.entries(evaluation.quantities));
	for (const [name, quantity] of linesByPart(evaluation)) if (!values.has(name)) values.set(name, quantity);
	valuesKept.set(evaluation, values);
	return values;
}

function linesByPart({ fits }: Evaluation): [string, ShownQuantity][] {
	return Object.entries(fits).flatMap(([fit, { model, parameters }]) => {
		if (model !== 'line' && model !== 'both-axes' && model !== 'origin') return [];
		return parameters
			.slice(0, 2)
			.map((quantity, i): [string, ShownQuantity] => [`${fit}.${i === 0 ? 'slope' : 'intercept'}`, quantity]);
	});
}

/**
 * The values as they are offered: what an abstract gives or the literature knows first, then other results, what was fitted, and at
 * last what was typed or is constant. Each under one name.
 */
export function offeredValues(evaluation: Evaluation): [string, ShownQuantity][] {
	const { quantities, comparisons, fits, workings } = evaluation;
	const compared = new Set(Object.values(comparisons).map(({ quantity }) => quantity));
	const fitted = new Set(Object.values(fits).flatMap(({ parameters }) => parameters.map(({ name }) => name)));
	const rank = (name: string) => {
		if (fitted.has(name) || !Object.hasOwn(quantities, name)) return 2;
		const own = name.split('.')[0] ?? name;
		return quantities[name]?.headline === true || compared.has(own)
			? 0
			: Object.hasOwn(workings, name)
				? 1
				: 3;
	};
	return [...linkableValues(evaluation)]
		.filter(
			([name, quantity]) => Object.hasOwn(quantities, name) || !Object.hasOwn(quantities, quantity.name)
		)
		.map((entry, index) => ({ entry, index, rank: rank(entry[0]) }))
		.sort((a, b) => a.rank - b.rank || a.index - b.index)
		.map(({ entry }) => entry);
}

export function namesOf(evaluation: Evaluation, kind: LinkKind): string[] {
	if (kind === 'value') return offeredValues(evaluation).map(([name]) => name);
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
	const byRow =
		name === ''
			? []
			: names.filter(
					(each) =>
						each.startsWith(`${name}.`) && (kind !== 'value' || Object.hasOwn(evaluation.quantities, each))
				);
	if (byRow[0] !== undefined) {
		return { message: `${name} has a ${noun.one} for each row: ${listed(byRow)}.`, nearest: byRow[0] };
	}
	const nearest = nearestName(name, names);
	const parts = [missing];
	const elsewhere = otherKind(evaluation, kind, name);
	if (elsewhere) parts.push(elsewhere);
	if (nearest !== null && names.length > 1) parts.push(`Nearest: ${nearest}.`);
	parts.push(`There ${names.length === 1 ? 'is' : 'are'}: ${listed(names)}.`);
	return { message: parts.join(' '), nearest };
}

/** Names in a row that differ by their key alone are told as a span: 'k.a to k.e'. */
function listed(names: string[]): string {
	const spans: { first: string; last: string; count: number }[] = [];
	for (const name of names) {
		const before = spans.at(-1);
		const own = /^(.*)\.[^.]*$/.exec(name)?.[1];
		if (
			before &&
			own !== undefined &&
			before.first.startsWith(`${own}.`) &&
			!before.first.slice(own.length + 1).includes('.')
		) {
			before.last = name;
			before.count += 1;
		} else spans.push({ first: name, last: name, count: 1 });
	}
	const texts = spans.map(({ first, last, count }) =>
		count === 1 ? first : `${first}${count === 2 ? ', ' : ' to '}${last}`
	);
	if (texts.length <= namesShown) return texts.join(', ');
	const left = spans.slice(namesShown).reduce((sum, { count }) => sum + count, 0);
	return `${texts.slice(0, namesShown).join(', ')} and ${left} more`;
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
