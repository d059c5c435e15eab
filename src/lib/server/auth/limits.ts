import { lt, sql } from 'drizzle-orm';
import { RateLimiterDrizzle, type RateLimiterRes } from 'rate-limiter-flexible';
import { database, schema } from '../db';
import { Refusal } from '../errors';
import { digestOf } from './secrets';

/** Tries within a window of seconds. The numbers are common practice; an address stands for a whole laboratory behind one router. */
const budgets = {
	'sign-in.account': { points: 10, duration: 15 * 60 },
	'sign-in.address': { points: 100, duration: 15 * 60 },
	'mail.account': { points: 4, duration: 60 * 60 },
	'mail.address': { points: 120, duration: 60 * 60 },
	words: { points: 60, duration: 15 * 60 },
	password: { points: 10, duration: 15 * 60 }
} as const;
export type Budget = keyof typeof budgets;

const limiters = new Map<Budget, RateLimiterDrizzle>();

/** Counts live in the database: they survive restarts and hold for every process. */
function limiter(budget: Budget): RateLimiterDrizzle {
	const known = limiters.get(budget);
	if (known) return known;
	const made = new RateLimiterDrizzle({
		storeClient: database(),
		schema: schema.signInLimits,
		keyPrefix: budget,
		clearExpiredByTimeout: false,
		...budgets[budget]
	});
	limiters.set(budget, made);
	return made;
}

/** Addresses and e-mails are not kept in the clear: a row says that somebody tried, not who. */
const keyOf = (subject: string) => Buffer.from(digestOf(subject)).toString('base64url');

/**
 * Takes one try from a budget. Counted before the try is made, so that many at once cannot slip through together.
 * Throws Refusal 'too-many' with the seconds to wait.
 */
export async function spend(budget: Budget, subject: string): Promise<void> {
	try {
		await limiter(budget).consume(keyOf(subject));
	} catch (thrown) {
		if (thrown instanceof Error) throw thrown;
		const seconds = Math.max(1, Math.ceil((thrown as RateLimiterRes).msBeforeNext / 1000));
		throw new Refusal('too-many', `Too many tries. Wait ${inWords(seconds)}.`, { retryAfter: seconds });
	}
}

/** Gives a try back: it was a good one. */
export const giveBack = async (budget: Budget, subject: string): Promise<void> => {
	await limiter(budget).reward(keyOf(subject));
};

/** Forgets the tries counted so far. */
export const forgive = async (budget: Budget, subject: string): Promise<void> => {
	await limiter(budget).delete(keyOf(subject));
};

/** Rows whose window is over. */
export async function dropExpiredLimits(): Promise<void> {
	await database()
		.delete(schema.signInLimits)
		.where(lt(schema.signInLimits.expire, sql`now()`));
}

function inWords(seconds: number): string {
	if (seconds < 60) return seconds === 1 ? '1 second' : `${seconds} seconds`;
	const minutes = Math.ceil(seconds / 60);
	return minutes === 1 ? '1 minute' : `${minutes} minutes`;
}
