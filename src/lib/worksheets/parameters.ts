import type { Quantity } from '$lib/quantities';
import { readValue } from './read-value';
import { textOf } from './rows';
import type { Sources } from './sources';
import type { Problem, Readings, Worksheet } from './types';

/** A parameter as read: a number, or one of its choices. */
export interface ReadParameter {
	typed: string;
	quantity: Quantity | null;
	choice: string | null;
	problems: Problem[];
}

/**
 * The parameters as they are typed now. One whose text is what it was before stays the very same, so that nothing that
 * rests on it is computed again.
 */
export function readParameters(
	worksheet: Worksheet,
	readings: Readings,
	before: ReadonlyMap<string, ReadParameter>,
	sources: Sources
): { parameters: Map<string, ReadParameter>; problems: Problem[] } {
	const parameters = new Map<string, ReadParameter>();
	const problems: Problem[] = [];
	for (const definition of worksheet.parameters) {
		const { name, label } = definition;
		const typed = textOf(readings.parameters, name);
		const known = before.get(name);
		const parameter = known?.typed === typed ? known : read(definition, typed, sources);
		problems.push(...parameter.problems);
		parameters.set(name, parameter);
		if (definition.kind === 'choice' && parameter.choice === null && typed.trim() !== '') {
			const message = `${label}: "${typed.trim()}" is none of ${definition.choices.join(', ')}. Kept as typed.`;
			problems.push({ severity: 'error', code: 'not-a-choice', message, parameter: name });
		}
	}
	return { parameters, problems };
}

function read(definition: Worksheet['parameters'][number], typed: string, sources: Sources): ReadParameter {
	const { name, label, kind, choices } = definition;
	if (kind === 'choice') {
		const text = typed.trim();
		return { typed, quantity: null, choice: choices.includes(text) ? text : null, problems: [] };
	}
	const standing = { place: name, run: '', anew: 'reading' } as const;
	const { quantity, problems } = readValue(typed, definition, label, standing, sources);
	return {
		typed,
		quantity,
		choice: null,
		problems: problems.map((problem) => ({ ...problem, parameter: name }))
	};
}
