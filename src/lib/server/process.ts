import type { IncomingMessage } from 'node:http';
import type { Duplex } from 'node:stream';
import * as accounts from './accounts';
import { closeDatabase } from './db';
import * as jobs from './jobs';
import { logger } from './logger';
import * as mail from './mail';

/** What scripts/serve.mjs finds to hand sockets to. */
interface Live {
	handleUpgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void;
	close(): Promise<void>;
}
interface LiveEditing {
	handleUpgrade: Live['handleUpgrade'];
	closeLive(): Promise<void>;
}

const liveSymbol = Symbol.for('meniscus.live');
const holder = globalThis as unknown as Record<symbol, Live | undefined>;

/** A text field of a job's payload. */
function field(payload: unknown, name: string): string {
	const value = (payload as Record<string, unknown> | null)?.[name];
	if (typeof value !== 'string') throw new Error(`a job without ${name}`);
	return value;
}

/** What the queue may hold, each under its name. */
const tasks: jobs.Tasks = {
	deliver: (payload) => mail.deliver(field(payload, 'id')),
	mailReset: (payload) => accounts.mailReset(field(payload, 'email')),
	tidy: async () => {
		await mail.sweep();
		await accounts.tidy();
	}
};

/** Works through the queue in this process. */
export const startJobs = () => jobs.start(tasks, ['tidy']);

/** Starts what one process does beside answering requests: the job queue and live editing. Ends it at shutdown. */
export async function startProcess(): Promise<void> {
	const runner = await startJobs();
	const live = await liveEditing();
	holder[liveSymbol] = {
		handleUpgrade: (request, socket, head) =>
			live ? live.handleUpgrade(request, socket, head) : socket.destroy(),
		close: async () => live?.closeLive()
	};
	process.once('sveltekit:shutdown', () => {
		runner
			.stop()
			.catch((thrown: unknown) => logger.warn({ err: thrown }, 'the job queue did not stop'))
			.then(closeDatabase)
			.catch((thrown: unknown) => logger.warn({ err: thrown }, 'the database pool did not close'));
	});
}

async function liveEditing(): Promise<LiveEditing | undefined> {
	const [load] = Object.values(import.meta.glob<LiveEditing>('./collab/index.ts'));
	return load?.();
}
