import { createHash, randomBytes } from 'node:crypto';

/** Bytes of chance in a mailed or kept secret: 256 bits, beyond guessing. */
const secretBytes = 32;

/** A secret for a link, 43 characters that an address may carry. */
export const newSecret = (): string => randomBytes(secretBytes).toString('base64url');

/** What the database keeps of a secret: its SHA-256. Secrets are random, so they need no salt. */
export const digestOf = (secret: string): Uint8Array => createHash('sha256').update(secret).digest();
