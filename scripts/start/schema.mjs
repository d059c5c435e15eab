import { join } from 'node:path';
import { root } from './folder.mjs';
import { StartProblem } from './problem.mjs';

/**
 * Brings the database up to date.
 * @param {string} ownerUrl
 * @param {string} applicationUrl
 * @returns {Promise<number>} how many migrations were applied
 */
export async function bringUpToDate(ownerUrl, applicationUrl) {
	const { tsImport } = await import('tsx/esm/api');
	const { migrate } = await tsImport('../../src/lib/server/db/migrate.ts', import.meta.url);
	try {
		const { applied } = await migrate({
			ownerUrl,
			applicationRole: decodeURIComponent(new URL(applicationUrl).username),
			folder: join(root, 'drizzle')
		});
		return applied;
	} catch (problem) {
		const cause = /** @type {{ message?: string, code?: string, cause?: { message?: string } }} */ (problem);
		const unreachable = [
			'ECONNREFUSED',
			'ENOTFOUND',
			'EHOSTUNREACH',
			'CONNECT_TIMEOUT',
			'28P01',
			'3D000',
			'28000'
		];
		const advice = unreachable.includes(cause.code ?? '')
			? ' DATABASE_URL and DATABASE_OWNER_URL should name a database that answers.'
			: '';
		throw new StartProblem(
			`The database could not be brought up to date: ${cause.cause?.message ?? cause.message ?? String(problem)}.${advice}`.replace(
				'..',
				'.'
			)
		);
	}
}
