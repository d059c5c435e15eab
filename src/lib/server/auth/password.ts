import { hash, verify } from '@node-rs/argon2';
import { unprocessable } from '../errors';
import { isCommonPassword } from './common-passwords';

/** Argon2id (the library's number 2) with 19 MiB, two passes, one lane: common practice for sign-in on a shared server. */
const cost = { algorithm: 2, memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export const shortestPassword = 12;
/** Longer ones only cost time to hash. */
const longestPassword = 256;

/** Two keyboards may spell one character differently; NFKC makes them the same password. */
const spelled = (password: string) => password.normalize('NFKC');

/** PHC string of a password. */
export const hashPassword = (password: string): Promise<string> => hash(spelled(password), cost);

let nobody: Promise<string> | undefined;

/**
 * Whether a password matches. Without a stored hash the same work is done on another one, so that the time taken does
 * not tell an unknown address from a wrong password.
 */
export async function passwordMatches(stored: string | null | undefined, password: string): Promise<boolean> {
	if (password.length > longestPassword * 4) return false;
	nobody ??= hashPassword('no account has this one');
	const matches = await verify(stored ?? (await nobody), spelled(password));
	return stored ? matches : false;
}

/** Throws Refusal 'unprocessable' when a password is too easily guessed; `field` names the input it was typed in. */
export function mustBeGoodPassword(password: string, email: string, field = 'password'): void {
	const problem = complaintAbout(spelled(password), email);
	if (problem) throw unprocessable(problem, { [field]: problem });
}

function complaintAbout(password: string, email: string): string | null {
	const length = [...password].length;
	if (length < shortestPassword)
		return `${length === 1 ? 'One character' : `${length} characters`}. Use at least ${shortestPassword}.`;
	if (length > longestPassword) return `${length} characters. Use at most ${longestPassword}.`;
	const plain = password.toLowerCase();
	const address = email.toLowerCase();
	const name = address.split('@')[0] ?? '';
	if (
		plain.includes(address) ||
		(name.length > 3 && plain.replaceAll(name, '').length < shortestPassword / 2)
	)
		return 'This is close to your e-mail address. Choose something else.';
	if (isCommonPassword(plain))
		return 'Many people use this one. Choose something else: four unrelated words do well.';
	return null;
}
