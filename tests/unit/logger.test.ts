import { DrizzleQueryError } from 'drizzle-orm';
import { expect, it } from 'vitest';
import { serializeThrown } from '../../src/lib/server/logger';

it('logs a failed query with what the database said and without what people wrote', () => {
	const written = 'We heated the bath\n    at once, and Tomas read the pressure.';
	const thrown = new DrizzleQueryError(
		'insert into "replies" ("body") values ($1)',
		[written],
		Object.assign(new Error('read ECONNRESET'), { code: 'ECONNRESET' })
	);
	const logged = serializeThrown(thrown);
	expect(logged).toMatchObject({
		message: 'read ECONNRESET',
		code: 'ECONNRESET',
		query: 'insert into "replies" ("body") values ($1)'
	});
	expect(logged['asked']).toContain('logger.test.ts');
	expect(JSON.stringify(logged)).not.toMatch(/heated|at once|Tomas/u);
});

it('leaves everything else thrown as it is', () => {
	expect(serializeThrown(new TypeError('no such thing'))).toMatchObject({
		type: 'TypeError',
		message: 'no such thing'
	});
});
