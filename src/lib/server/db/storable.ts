import { unprocessable } from '../errors';

/** U+0000, which PostgreSQL takes neither in text nor in JSON, or half of a surrogate pair, which is no character. */
const unstorable = (text: string): boolean => text.includes('\0') || !text.isWellFormed();

/** Levels of objects and lists inside one another; no contract has ten. */
const deepest = 40;

/** Path of the first string, key or value, that cannot be stored; null when all of them can. */
function unstorableAt(value: unknown, path: string, depth = 0): string | null {
	if (typeof value === 'string') return unstorable(value) ? path : null;
	if (typeof value !== 'object' || value === null) return null;
	if (depth > deepest) throw unprocessable('Lists inside lists inside lists, too deep to be read.');
	for (const [key, entry] of Object.entries(value)) {
		// A name that cannot be stored is not repeated in the answer either.
		if (unstorable(key)) return path;
		const found = unstorableAt(entry, path === '' ? key : `${path}.${key}`, depth + 1);
		if (found !== null) return found;
	}
	return null;
}

/**
 * Asked of everything that comes in, before its own rules: the database would refuse such text, late and without a word
 * that helps. Errors: Refusal 'unprocessable' naming the field.
 * @param where what to call a place that has no name
 */
export function mustBeStorable(value: unknown, where: string): void {
	const found = unstorableAt(value, '');
	if (found === null) return;
	const field = found || where;
	const problem = 'Holds a sign that is not text. Type it again.';
	throw unprocessable(`Look at: ${field}.`, { [field]: problem });
}

/** Text as the database takes it: what is not a character becomes U+FFFD, as everywhere where text is decoded. */
export const storableText = (text: string): string => text.toWellFormed().replaceAll('\0', '\uFFFD');
