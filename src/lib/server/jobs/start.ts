import { Logger, run, type Runner, type TaskList } from 'graphile-worker';
import { Pool } from 'pg';
import { env } from '../env';
import { logger } from '../logger';

/** Name of a task -> what it does with the payload it was queued with. A thrown error tries it again later. */
export type Tasks = Record<string, (payload: unknown) => Promise<void>>;

/** Jobs at once in one process; typing in the same process comes first. */
const concurrency = 2;

const log = logger.child({ part: 'jobs' });
const quiet = new Logger(() => (level, message) => {
	if (level === 'error') log.error(message);
	else if (level === 'warning') log.warn(message);
	else log.debug(message);
});

/** Pauses before the queue is taken up again after the database went away, ms; the last one repeats. */
const pauses = [500, 1_000, 2_000, 5_000];

/** The queue being worked through; it outlives the database's absence. */
export interface Jobs {
	stop(): Promise<void>;
}

/**
 * The runner's connections. Its own pool goes without listeners before it goes, and a connection lost in between would end
 * the process; ours listens as long as it lives, whatever becomes of the runner.
 */
function openPool(): Pool {
	const pool = new Pool({ connectionString: env().DATABASE_URL, max: concurrency + 2 });
	const lost = (thrown: Error) => log.warn({ err: thrown.message }, 'a connection of the queue was lost');
	// Between queries the pool tells of it, during one the connection.
	pool.on('error', lost);
	pool.on('connect', (client) => client.on('error', lost));
	return pool;
}

/**
 * Works through the queue in this process until stopped. Any number of processes may do so. The queue's tables must be
 * there: the migrations make them. A runner that gives up because the database was lost is followed by another one:
 * the process goes on serving meanwhile. What it was at stays locked: {@link freeAbandoned}.
 * @param tasks one for each name in the queue
 * @param everyMinute names of tasks that also run by the clock, once for all processes
 */
export async function start(tasks: Tasks, everyMinute: string[] = []): Promise<Jobs> {
	const taskList: TaskList = Object.fromEntries(
		Object.entries(tasks).map(([name, task]) => [name, (payload: unknown) => task(payload)])
	);
	const pgPool = openPool();
	let stopped = false;
	let runner: Runner | null = null;
	let tries = 0;
	const begin = async () => {
		const begun = await run({
			pgPool,
			taskList,
			concurrency,
			noHandleSignals: true,
			logger: quiet,
			crontab: everyMinute.map((name) => `* * * * * ${name} ?max=3`).join('\n')
		});
		// It settles in both ways when it gives up: what stopped it is then in its own lines.
		begun.promise.then(() => again(), again);
		runner = begun;
		tries = 0;
		if (stopped) await begun.stop();
	};
	const again = (thrown?: unknown) => {
		runner = null;
		if (stopped) return;
		log.warn({ err: thrown }, 'the queue stopped; it is taken up again');
		const pause = pauses[Math.min(tries++, pauses.length - 1)] ?? 0;
		setTimeout(() => {
			if (!stopped) begin().catch(again);
		}, pause).unref();
	};
	try {
		await begin();
	} catch (thrown) {
		await pgPool.end();
		throw thrown;
	}
	return {
		async stop() {
			stopped = true;
			try {
				await runner?.stop();
			} finally {
				await pgPool.end();
			}
		}
	};
}
