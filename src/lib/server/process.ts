import type { IncomingMessage } from 'node:http';
import type { Duplex } from 'node:stream';
import * as accounts from './accounts';
import { closeDatabase, database } from './db';
import * as files from './files';
import * as jobs from './jobs';
import { logger } from './logger';
import * as mail from './mail';
import * as readings from './readings';

/** What scripts/serve.mjs finds to hand sockets to. */
interface Live {
	handleUpgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void;
	close(): Promise<void>;
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
		await jobs.freeAbandoned(database());
		await mail.sweep();
		await accounts.tidy();
		await files.tidy();
	},
	// Dates move and extensions are granted: what is closed follows within a minute.
	freeze: async () => {
		await readings.setFreezing(database());
	}
};

/** Works through the queue in this process. */
export const startJobs = () => jobs.start(tasks, ['tidy', 'freeze']);

/**
 * Starts what one process does beside answering requests: live editing and the job queue. Ends it at shutdown. Rejects
 * when the database may lose what it confirmed: the process must not serve then.
 */
export async function startProcess(): Promise<void> {
	// Loaded here, not above: whoever only works through the queue needs no live editing.
	const { closeLive, handleUpgrade, startLive } = await import('./collab');
	await startLive();
	holder[liveSymbol] = { handleUpgrade, close: closeLive };
	const runner = await startJobs();
	process.once('sveltekit:shutdown', () => {
		runner
			.stop()
			.catch((thrown: unknown) => logger.warn({ err: thrown }, 'the job queue did not stop'))
			.then(closeDatabase)
			.catch((thrown: unknown) => logger.warn({ err: thrown }, 'the database pool did not close'));
	});
}
