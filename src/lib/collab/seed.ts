import * as Y from 'yjs';
import type { Readings } from '$lib/worksheets';
import { writeReadings } from './readings';
import { writeText } from './section';

/**
 * Client number of seeds. Real clients draw theirs at random from 32 bits. A fixed one makes equal seeds equal bytes:
 * the same text seeded twice is one edit received twice, not the text doubled.
 */
const seedClient = 1;

/** First update of a section document, for the server alone. */
export function seedSection(text: string): Uint8Array {
	return seed((doc) => writeText(doc, text));
}

/** First update of a readings document, for the server alone. */
export function seedReadings(readings: Readings): Uint8Array {
	return seed((doc) => writeReadings(doc, readings));
}

function seed(write: (doc: Y.Doc) => void): Uint8Array {
	const doc = new Y.Doc();
	doc.clientID = seedClient;
	write(doc);
	const update = Y.encodeStateAsUpdate(doc);
	doc.destroy();
	return update;
}
