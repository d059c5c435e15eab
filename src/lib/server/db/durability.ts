import type postgres from 'postgres';

/** Oldest PostgreSQL with `NULLS NOT DISTINCT`, which the schema needs. */
const oldestVersion = 150_000;

/** What makes a database unfit to hold what people were told is stored; empty when fit. */
export async function objectionsTo(sql: postgres.Sql): Promise<string[]> {
	const [row] = await sql<{ version: number; fsync: string; commit: string }[]>`
		select current_setting('server_version_num')::int as version, current_setting('fsync') as fsync,
			current_setting('synchronous_commit') as commit`;
	if (!row) return ['The database did not answer.'];
	const objections: string[] = [];
	if (row.version < oldestVersion) {
		objections.push(`The database is PostgreSQL ${Math.floor(row.version / 10_000)}; 15 or later is needed.`);
	}
	if (row.fsync !== 'on')
		objections.push('The database runs with fsync off: a crash would lose stored work. Turn fsync on.');
	if (row.commit === 'off') {
		objections.push(
			'The database runs with synchronous_commit off: a crash would lose stored work. Turn synchronous_commit on.'
		);
	}
	return objections;
}
