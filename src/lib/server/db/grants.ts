/** The application role may only add to and read these; triggers say the same to the owner. */
export const appendOnlyTables = [
	'experiment_versions',
	'rubric_versions',
	'criteria',
	'levels',
	'document_versions',
	'seals',
	'amendments',
	'snapshots',
	'snapshot_sections',
	'score_events',
	'remark_revisions',
	'anchors',
	'final_marks',
	'releases',
	'appeals',
	'audit',
	'replies',
	// Erasing the bytes of a part is retention's, done as the owner.
	'parts'
] as const;

/** Tables whose rows the application role may change but never delete. */
const keptTables = [
	'users',
	'reports',
	'work',
	'markings',
	'remarks',
	'documents',
	'outbox',
	'courses',
	'assignments'
] as const;

/**
 * Statements, run by the owner after every migration, that leave the application role with what it needs and no more.
 * Names are quoted identifiers; `applicationRole` comes from the settings.
 */
export function grantStatements(applicationRole: string): string[] {
	const role = `"${applicationRole.replaceAll('"', '""')}"`;
	const list = (tables: readonly string[]) => tables.map((table) => `"${table}"`).join(', ');
	return [
		`GRANT USAGE ON SCHEMA public TO ${role}`,
		`REVOKE CREATE ON SCHEMA public FROM PUBLIC`,
		`GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA public TO ${role}`,
		`GRANT USAGE, SELECT ON ALL SEQUENCES IN SCHEMA public TO ${role}`,
		`REVOKE UPDATE, DELETE, TRUNCATE ON ${list(appendOnlyTables)} FROM ${role}`,
		`REVOKE DELETE, TRUNCATE ON ${list(keptTables)} FROM ${role}`,
		`DO $$ BEGIN IF EXISTS (SELECT 1 FROM pg_namespace WHERE nspname = 'graphile_worker') THEN
			GRANT USAGE ON SCHEMA graphile_worker TO ${role};
			GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA graphile_worker TO ${role};
			GRANT USAGE, SELECT ON ALL SEQUENCES IN SCHEMA graphile_worker TO ${role};
			GRANT EXECUTE ON ALL FUNCTIONS IN SCHEMA graphile_worker TO ${role};
		END IF; END $$`
	];
}
