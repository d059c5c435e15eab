import { Logger, run, type Runner, type TaskList } from 'graphile-worker';
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

/**
 * Works through the queue in this process until stopped. Any number of processes may do so. The queue's tables must be
 * there: the migrations make them.
 * @param tasks one for each name in the queue
 * @param everyMinute names of tasks that also run by the clock, once for all processes
 */
export async function start(tasks: Tasks, everyMinute: string[] = []): Promise<Runner> {
	const taskList: TaskList = Object.fromEntries(
		Object.entries(tasks).map(([name, task]) => [name, (payload: unknown) => task(payload)])
	);
	return run({
		connectionString: env().DATABASE_URL,
		taskList,
		concurrency,
		maxPoolSize: concurrency + 2,
		noHandleSignals: true,
		logger: quiet,
		crontab: everyMinute.map((name) => `* * * * * ${name} ?max=3`).join('\n')
	});
}
