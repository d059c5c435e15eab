import postgres from 'postgres';

// What the start knows about a database is kept in the database, so that the two cannot disagree: a copy brings it along, a
// new one does not have it.

/**
 * @template Result
 * @param {string} ownerUrl
 * @param {(sql: postgres.Sql) => Promise<Result>} work
 * @returns {Promise<Result>}
 */
async function asOwner(ownerUrl, work) {
	const sql = postgres(ownerUrl, { max: 1, onnotice: () => undefined });
	try {
		return await work(sql);
	} finally {
		await sql.end();
	}
}

/**
 * @param {string} ownerUrl
 * @returns {Promise<Record<string, string>>}
 */
export function factsOf(ownerUrl) {
	return asOwner(ownerUrl, async (sql) => {
		const [table] = await sql`select to_regclass('setup.facts') as name`;
		if (!table?.name) return {};
		const rows = await sql`select name, said from setup.facts`;
		return Object.fromEntries(rows.map((row) => [row.name, row.said]));
	});
}

/**
 * @param {string} ownerUrl
 * @param {string} name
 * @param {string} said
 */
export function rememberFact(ownerUrl, name, said) {
	return asOwner(ownerUrl, async (sql) => {
		await sql`create schema if not exists setup`;
		await sql`create table if not exists setup.facts (name text primary key, said text not null, at timestamptz not null default now())`;
		await sql`insert into setup.facts (name, said) values (${name}, ${said})
			on conflict (name) do update set said = excluded.said, at = now()`;
	});
}
