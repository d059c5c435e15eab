import postgres from 'postgres';

export const ownerRole = 'meniscus_owner';
export const applicationRole = 'meniscus_application';
export const databaseName = 'meniscus';

/**
 * Makes the two roles: one owns the tables and migrates, the other runs the application and can neither change tables nor
 * rewrite what is append-only. Safe to repeat.
 * @param {string} superuserUrl
 * @param {{ owner: string, application: string }} passwords letters and digits only
 * @param {{ mayCreateDatabases?: boolean }} [options] for tests, which give each file a database of its own
 */
export async function ensureRoles(superuserUrl, passwords, options = {}) {
	const sql = postgres(superuserUrl, { max: 1, onnotice: () => undefined });
	try {
		const known = new Set((await sql`select rolname from pg_roles`).map((row) => row.rolname));
		for (const [role, password] of [
			[ownerRole, passwords.owner],
			[applicationRole, passwords.application]
		]) {
			const createDatabases = role === ownerRole && options.mayCreateDatabases ? 'CREATEDB' : 'NOCREATEDB';
			await sql.unsafe(
				`${known.has(role) ? 'ALTER' : 'CREATE'} ROLE ${role} LOGIN ${createDatabases} PASSWORD '${password}'`
			);
		}
	} finally {
		await sql.end();
	}
}

/**
 * Makes the database when missing; only the two roles may open it.
 * @param {string} superuserUrl
 */
export async function ensureDatabase(superuserUrl) {
	const sql = postgres(superuserUrl, { max: 1, onnotice: () => undefined });
	try {
		const [known] = await sql`select 1 from pg_database where datname = ${databaseName}`;
		if (!known) await sql.unsafe(`CREATE DATABASE ${databaseName} OWNER ${ownerRole}`);
		await sql.unsafe(`REVOKE ALL ON DATABASE ${databaseName} FROM PUBLIC`);
		await sql.unsafe(`GRANT CONNECT ON DATABASE ${databaseName} TO ${applicationRole}`);
	} finally {
		await sql.end();
	}
}

/**
 * Removes the database and what is in it.
 * @param {string} superuserUrl
 */
export async function dropDatabase(superuserUrl) {
	const sql = postgres(superuserUrl, { max: 1, onnotice: () => undefined });
	try {
		await sql.unsafe(`DROP DATABASE IF EXISTS ${databaseName} WITH (FORCE)`);
	} finally {
		await sql.end();
	}
}
