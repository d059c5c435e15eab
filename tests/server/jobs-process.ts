// A process of its own that does nothing but work through the queue: `node --import tsx tests/server/jobs-process.ts <database>`.
// Says `{ ready: true }` once, and `{ did: <name> }` at the end of each task. A rejection that nobody awaits ends it.
import * as jobs from '../../src/lib/server/jobs';

process.env['DATABASE_URL'] = process.argv[2];
// Like a server's socket: keeps the process while the queue is away.
process.on('message', () => undefined);

const task = (then: () => void) => async (payload: unknown) => {
	await new Promise((resolve) => setTimeout(resolve, 3));
	process.send?.({ did: (payload as { name: string }).name });
	then();
};
await jobs.start({
	succeed: task(() => undefined),
	fail: task(() => {
		throw new Error('as every time');
	})
});
process.send?.({ ready: true });
