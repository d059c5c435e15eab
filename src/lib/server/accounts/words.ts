import { randomInt } from 'node:crypto';
import { and, eq, sql } from 'drizzle-orm';
import { digestOf, giveBack, spend } from '../auth';
import { database, schema, type Database, type Transaction } from '../db';
import { unprocessable } from '../errors';
import { benchWordList } from './bench-word-list';

const { benchWords, courses, labSections } = schema;

/** Words in one set: four of 512 or more are at least 36 bits. */
const wordsInSet = 4;

/** Words as typed by hand, joined by hyphens: case, spaces and punctuation do not matter. */
export const spelledWords = (typed: string): string =>
	typed
		.toLowerCase()
		.split(/[^a-z]+/)
		.filter(Boolean)
		.join('-');

export const drawWords = (): string =>
	Array.from({ length: wordsInSet }, () => benchWordList[randomInt(benchWordList.length)]).join('-');

/** The lab section that words open now, with its course; throws Refusal 'unprocessable' for words that open nothing. */
export async function sectionOfWords(typed: string, db: Database | Transaction = database()) {
	const [row] = await db
		.select({ id: benchWords.id, course: courses, section: labSections, words: benchWords.words })
		.from(benchWords)
		.innerJoin(courses, eq(courses.id, benchWords.courseId))
		.innerJoin(labSections, eq(labSections.id, benchWords.labSectionId))
		.where(
			and(eq(benchWords.wordsSha256, digestOf(spelledWords(typed))), sql`${benchWords.expiresAt} > now()`)
		);
	const problem = 'These words open nothing. Look at the spelling; words last a week, then ask for new ones.';
	if (!row) throw unprocessable(problem, { words: problem });
	return row;
}

/** The same for somebody who may be guessing: only words that open nothing count against `subject`. */
export async function sectionOfGuessedWords(subject: string, typed: string) {
	await spend('words', subject);
	const found = await sectionOfWords(typed);
	await giveBack('words', subject);
	return found;
}
