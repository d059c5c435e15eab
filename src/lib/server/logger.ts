import { DrizzleQueryError } from 'drizzle-orm';
import { pino } from 'pino';
import { settings } from './env';

const levels = settings.find((setting) => setting.name === 'LOG_LEVEL');
// Read apart from env(): lines must come out even when another setting is missing.
const level = levels?.schema.safeParse(process.env['LOG_LEVEL'] ?? levels.fallback);

/**
 * What is logged of something thrown. The database layer's message names every parameter of the query that failed, which is
 * what people wrote: the statement and what the database said go into the log, the parameters do not.
 */
export function serializeThrown(thrown: Error): pino.SerializedError {
	if (!(thrown instanceof DrizzleQueryError)) return pino.stdSerializers.err(thrown);
	const { cause, query, message, stack = '' } = thrown;
	const said = pino.stdSerializers.err(cause ?? new Error('a query failed'));
	// The frames follow the message.
	const from = stack.indexOf(message);
	const asked = from < 0 ? '' : stack.slice(from + message.length).trim();
	return { ...said, query, asked };
}

/** Structured lines on standard output. Passwords, tokens and cookies never get in, wherever they sit in what is logged. */
export const logger = pino({
	base: undefined,
	level: level?.success ? String(level.data) : 'info',
	timestamp: () => `,"time":"${new Date().toISOString()}"`,
	serializers: { err: serializeThrown },
	redact: {
		paths: [
			'password',
			'token',
			'cookie',
			'authorization',
			'secret',
			'*.password',
			'*.token',
			'*.cookie',
			'*.authorization',
			'*.secret'
		],
		censor: '[left out]'
	}
});
