import { createHash } from 'node:crypto';
import canonicalize from 'canonicalize';

/**
 * The bytes that are hashed and kept: canonical JSON (RFC 8785) in UTF-8. What JSON cannot say is made plain first, so
 * that nothing a student can write or read off stops a hand-in: a number that is none becomes null, half of a surrogate
 * pair becomes U+FFFD.
 */
export function canonicalPart(value: unknown): Uint8Array {
	const text = canonicalize(plain(value));
	if (text === undefined) throw new TypeError('This value has no JSON form.');
	return Buffer.from(text, 'utf8');
}

export const sha256 = (bytes: Uint8Array): Buffer => createHash('sha256').update(bytes).digest();
export const hex = (bytes: Uint8Array): string => Buffer.from(bytes).toString('hex');

function plain(value: unknown): unknown {
	if (typeof value === 'string') return value.toWellFormed();
	if (typeof value === 'number') return Number.isFinite(value) ? value : null;
	if (Array.isArray(value)) return value.map((entry) => plain(entry));
	if (typeof value === 'object' && value !== null) {
		const entries = Object.entries(value).filter(([, entry]) => entry !== undefined);
		return Object.fromEntries(entries.map(([key, entry]) => [key.toWellFormed(), plain(entry)]));
	}
	return value;
}
