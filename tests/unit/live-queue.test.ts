import { describe, expect, it } from 'vitest';
import * as Y from 'yjs';
import { AppendQueue } from '../../src/lib/server/collab/append-queue';

interface Log {
	entries: { userId: string; bytes: Uint8Array }[];
	/** appends running at this moment, and the most there ever were */
	running: number;
	most: number;
}

/** A queue towards a log in memory. `fail` decides by attempt: 'throw' may succeed later, 'refuse' never. */
function queueOver(fail: (attempt: number) => 'throw' | 'refuse' | 'no' = () => 'no') {
	const log: Log = { entries: [], running: 0, most: 0 };
	let attempt = 0;
	const stored: number[] = [];
	let refused = 0;
	const queue = new AppendQueue({
		async append(userId, bytes) {
			log.running += 1;
			log.most = Math.max(log.most, log.running);
			await new Promise((resolve) => setTimeout(resolve, 1));
			log.running -= 1;
			const outcome = fail(attempt++);
			if (outcome === 'throw') throw new Error('connection lost');
			if (outcome === 'refuse') return null;
			log.entries.push({ userId, bytes });
			return { seq: log.entries.length };
		},
		stored: (seq) => stored.push(seq),
		refused: () => (refused += 1),
		delay: () => 1
	});
	return { queue, log, stored, refusals: () => refused };
}

/** Edits one after another in one document. */
function edits(count: number): { doc: Y.Doc; updates: Uint8Array[] } {
	const doc = new Y.Doc();
	const updates: Uint8Array[] = [];
	doc.on('update', (update: Uint8Array) => updates.push(update));
	for (let n = 0; n < count; n += 1) doc.getText('text').insert(n, String(n % 10));
	return { doc, updates };
}
const textOf = (log: Log) => {
	const doc = new Y.Doc();
	for (const { bytes } of log.entries) Y.applyUpdate(doc, bytes);
	return doc.getText('text').toString();
};
const committed = (queue: AppendQueue) => new Promise<void>((resolve) => queue.barrier(resolve));

describe('edits on their way into the log', () => {
	it('go one append at a time, in order, also through failures', async () => {
		const { queue, log } = queueOver((attempt) => (attempt % 3 === 0 ? 'throw' : 'no'));
		const { doc, updates } = edits(60);
		updates.forEach((update, n) => queue.take(n < 30 ? 'a' : 'b', update));
		await committed(queue);
		expect(log.most).toBe(1);
		expect(textOf(log)).toBe(doc.getText('text').toString());
		expect(log.entries.map(({ userId }) => userId)).toEqual(
			[...log.entries.map(({ userId }) => userId)].sort()
		);
	});

	it('are put together while they wait, but never across people', async () => {
		const { queue, log } = queueOver();
		const { doc, updates } = edits(9);
		updates.forEach((update, n) => queue.take('aaabbbaaa'.charAt(n), update));
		await committed(queue);
		expect(log.entries.map(({ userId }) => userId).join('')).toMatch(/^a{1,2}ba$/);
		expect(textOf(log)).toBe(doc.getText('text').toString());
	});
});

describe('a barrier', () => {
	it('is answered at once when nothing waits', () => {
		const { queue } = queueOver();
		let answered = false;
		queue.barrier(() => (answered = true));
		expect(answered).toBe(true);
	});

	it('is answered after everything before it and not after what follows', async () => {
		const { queue, log } = queueOver();
		const { updates } = edits(4);
		const seen: number[] = [];
		for (const update of updates) {
			queue.take(`user ${seen.length}${updates.indexOf(update)}`, update);
			queue.barrier(() => seen.push(log.entries.length));
		}
		await committed(queue);
		expect(seen).toEqual([1, 2, 3, 4]);
	});

	it('is never answered after a refusal, and nothing is appended any more', async () => {
		const { queue, log, refusals } = queueOver((attempt) => (attempt === 1 ? 'refuse' : 'no'));
		const { updates } = edits(4);
		let answered = 0;
		updates.forEach((update, n) => queue.take(`user ${n}`, update));
		queue.barrier(() => (answered += 1));
		await new Promise((resolve) => setTimeout(resolve, 50));
		queue.take('user 9', updates[0] ?? new Uint8Array());
		queue.barrier(() => (answered += 1));
		await new Promise((resolve) => setTimeout(resolve, 20));
		expect([log.entries.length, answered, refusals()]).toEqual([1, 0, 1]);
	});
});
