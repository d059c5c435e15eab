import * as encoding from 'lib0/encoding';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { WebSocket } from 'ws';
import { closeDatabase, database } from '../../src/lib/server/db';
import { documentName, readText, sectionText } from '../../src/lib/collab';
import * as readings from '../../src/lib/server/readings';
import { freshDatabase, type FreshDatabase } from '../harness';
import { makeBench, type Bench } from './live-course';
import { openClient, origin, serveLive, until, type LiveServer } from './live-people';

let fresh: FreshDatabase;
let bench: Bench;
let server: LiveServer;
const unexpected: unknown[] = [];
const note = (problem: unknown) => unexpected.push(problem);

beforeAll(async () => {
	fresh = await freshDatabase();
	bench = await makeBench();
	server = await serveLive(fresh.url);
	process.on('uncaughtException', note);
	process.on('unhandledRejection', note);
});
afterAll(async () => {
	process.off('uncaughtException', note);
	process.off('unhandledRejection', note);
	await server.close();
	await closeDatabase();
	await fresh.drop();
});

const bytes = (...numbers: number[]) => Uint8Array.from(numbers);
/** A message as the wire has it: document, kind, and whatever follows. */
function message(name: string, kind: number, rest: Uint8Array): Uint8Array {
	const encoder = encoding.createEncoder();
	encoding.writeVarString(encoder, name);
	encoding.writeVarUint(encoder, kind);
	encoding.writeUint8Array(encoder, rest);
	return encoding.toUint8Array(encoder);
}
const token = bytes(0, 0);
const name = () => documentName(bench.resultsId, 1);

/** Signed in and admitted to the document, then sending `hostile`. */
async function sendAdmitted(hostile: Uint8Array | string): Promise<void> {
	const socket = new WebSocket(server.url, { headers: { origin, cookie: `person=${bench.student.id}` } });
	socket.on('error', () => undefined);
	let answers = 0;
	socket.on('message', () => (answers += 1));
	await new Promise((resolve) => socket.once('open', resolve));
	socket.send(message(name(), 2, token));
	await until('admitted', () => answers > 0);
	socket.send(hostile);
	await new Promise((resolve) => setTimeout(resolve, 150));
	socket.terminate();
}

test.each<[string, () => Uint8Array | string]>([
	['text', () => 'hello'],
	['nothing', () => bytes()],
	['a length without its string', () => bytes(255, 255, 255, 255, 15, 1)],
	['a kind that is none', () => message(name(), 99, bytes(1, 2, 3))],
	['an edit of random bytes', () => message(name(), 0, bytes(2, 5, 200, 201, 202, 203, 204))],
	['an edit cut short', () => message(name(), 0, bytes(2, 50, 1, 1))],
	['a step of no protocol', () => message(name(), 0, bytes(9))],
	['a state vector of random bytes', () => message(name(), 0, bytes(0, 4, 255, 255, 255, 255))],
	['presence of random bytes', () => message(name(), 1, bytes(4, 200, 1, 7, 9))],
	['a word that is no JSON', () => message(name(), 5, bytes(3, 123, 123, 123))],
	['a word of another shape', () => message(name(), 5, bytes(4, 110, 117, 108, 108))],
	['a document that is none', () => message('__proto__', 0, bytes(0, 0))]
])('%s on the live socket harms nobody', { timeout: 20_000 }, async (_, hostile) => {
	await sendAdmitted(hostile());
	const client = openClient(server, { person: bench.mate.id, documentId: bench.resultsId, local: null });
	try {
		await until('stored', () => client.state === 'stored');
		const text = sectionText(client.doc);
		text.insert(text.length, '.');
		await until('stored', () => client.state === 'stored');
		const { doc } = await readings.storedDocument(database(), bench.resultsId);
		expect(readText(doc)).toBe(text.toString());
	} finally {
		client.destroy();
	}
	expect(unexpected).toEqual([]);
});
