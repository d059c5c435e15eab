import { execFileSync } from 'node:child_process';
import { cpSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, relative } from 'node:path';
import postgres from 'postgres';
import { migrate } from '../src/lib/server/db/migrate';
import { root } from './start/folder.mjs';
import { throwAwayCluster, type ThrowAwayCluster } from './throw-away';

// Holds migrations and schema together: the schema makes no further migration, the migrations are one chain whose times
// increase (the migrator passes over one with an older time without a word), and applying them gives the tables, columns,
// constraints and indexes that the schema describes.

const folder = join(root, 'drizzle');
const drizzleKit = join(root, 'node_modules/drizzle-kit/bin.cjs');
const schema = './src/lib/server/db/schema/*.ts';

interface Entry {
	idx: number;
	when: number;
	tag: string;
}
interface Snapshot {
	id: string;
	prevId: string;
}

/** One line for each thing in the database that both ways of making it must agree on. */
type Catalogue = Map<string, string>;

const json = <Shape>(path: string): Shape => JSON.parse(readFileSync(path, 'utf8')) as Shape;

function chainProblems(): string[] {
	const problems: string[] = [];
	const { entries } = json<{ entries: Entry[] }>(join(folder, 'meta/_journal.json'));
	entries.forEach((entry, place) => {
		const before = entries[place - 1];
		if (entry.idx !== place) problems.push(`${entry.tag} has number ${entry.idx} at place ${place}.`);
		if (before && entry.when <= before.when)
			problems.push(`${entry.tag} is not later than ${before.tag}: it would be passed over.`);
	});
	const files = readdirSync(folder).filter((name) => name.endsWith('.sql'));
	const listed = new Set(entries.map((entry) => `${entry.tag}.sql`));
	for (const file of files) if (!listed.has(file)) problems.push(`${file} is not in the journal.`);
	for (const file of listed)
		if (!files.includes(file)) problems.push(`${file} is in the journal and not there.`);
	let previous = '00000000-0000-0000-0000-000000000000';
	for (const name of readdirSync(join(folder, 'meta'))
		.filter((file) => file.endsWith('_snapshot.json'))
		.sort()) {
		const snapshot = json<Snapshot>(join(folder, 'meta', name));
		if (snapshot.prevId !== previous)
			problems.push(`${name} does not follow the one before it: two chains were mixed.`);
		previous = snapshot.id;
	}
	return problems;
}

/** Runs the generator on a copy; what it adds is what a migration is missing for. */
function missingMigrations(): string[] {
	const copy = mkdtempSync(join(tmpdir(), 'meniscus-migrations-'));
	try {
		cpSync(folder, copy, { recursive: true });
		const before = new Set(readdirSync(copy));
		const out = relative(root, copy);
		execFileSync(
			process.execPath,
			[drizzleKit, 'generate', '--dialect=postgresql', `--schema=${schema}`, `--out=${out}`],
			{
				cwd: root,
				stdio: ['ignore', 'pipe', 'pipe']
			}
		);
		const added = readdirSync(copy).filter((name) => !before.has(name));
		return added.map(
			(name) => `The schema needs a migration that is not there:\n${readFileSync(join(copy, name), 'utf8')}`
		);
	} catch (problem) {
		return [`The generator stopped: ${problem instanceof Error ? problem.message : String(problem)}`];
	} finally {
		rmSync(copy, { recursive: true, force: true });
	}
}

/** The schema as statements, without any migration. */
const schemaStatements = () =>
	execFileSync(process.execPath, [drizzleKit, 'export', '--dialect=postgresql', `--schema=${schema}`], {
		cwd: root,
		encoding: 'utf8'
	});

async function catalogue(url: string): Promise<Catalogue> {
	const sql = postgres(url, { max: 1, onnotice: () => undefined });
	try {
		const columns = await sql<{ name: string; said: string }[]>`
			select c.relname || '.' || a.attname as name,
				format_type(a.atttypid, a.atttypmod) || case when a.attnotnull then ' not null' else '' end
					|| coalesce(' default ' || pg_get_expr(d.adbin, d.adrelid), '') || case when a.attgenerated <> '' then ' generated' else '' end as said
			from pg_attribute a join pg_class c on c.oid = a.attrelid left join pg_attrdef d on d.adrelid = c.oid and d.adnum = a.attnum
			where c.relnamespace = 'public'::regnamespace and c.relkind in ('r', 'p') and a.attnum > 0 and not a.attisdropped`;
		const constraints = await sql<{ name: string; said: string; kind: string }[]>`
			select conrelid::regclass || ' constraint ' || conname as name, contype as kind, pg_get_constraintdef(oid) as said
			from pg_constraint where connamespace = 'public'::regnamespace and conrelid <> 0 and contype in ('p', 'u', 'f', 'c', 'x')`;
		const indexes = await sql<{ name: string; said: string }[]>`
			select 'index ' || indexname as name, indexdef as said from pg_indexes where schemaname = 'public'`;
		return new Map([...columns, ...constraints, ...indexes].map(({ name, said }) => [name, said]));
	} finally {
		await sql.end();
	}
}

/** What the schema language cannot say and a hand-written migration therefore adds; each must be there. */
const byHand = new Set(json<string[]>(join(root, 'scripts/made-by-hand.json')));

function differences(fromSchema: Catalogue, fromMigrations: Catalogue): string[] {
	const problems: string[] = [];
	for (const [name, said] of fromSchema) {
		const other = fromMigrations.get(name);
		if (other === undefined) problems.push(`${name}: in the schema, missing after the migrations.`);
		else if (other !== said) problems.push(`${name}: the schema says ${said}; the migrations made ${other}.`);
	}
	for (const name of fromMigrations.keys()) {
		if (!fromSchema.has(name) && !byHand.has(name))
			problems.push(`${name}: made by a migration, not in the schema.`);
	}
	for (const name of byHand) {
		if (!fromMigrations.has(name))
			problems.push(`${name}: listed as made by hand, missing after the migrations.`);
	}
	return problems;
}

async function compareCatalogues(cluster: ThrowAwayCluster): Promise<{ problems: string[]; size: number }> {
	const sql = postgres(cluster.superuserUrl(), { max: 1, onnotice: () => undefined });
	await sql`create database migrated owner meniscus_owner`;
	await sql`create database described owner meniscus_owner`;
	await sql.end();
	await migrate({ ownerUrl: cluster.ownerUrl('migrated'), applicationRole: 'meniscus_application', folder });
	const described = postgres(cluster.ownerUrl('described'), { max: 1, onnotice: () => undefined });
	await described`create extension btree_gist`;
	await described.unsafe(schemaStatements());
	await described.end();
	const fromSchema = await catalogue(cluster.ownerUrl('described'));
	return {
		problems: differences(fromSchema, await catalogue(cluster.ownerUrl('migrated'))),
		size: fromSchema.size
	};
}

const problems = [...chainProblems(), ...missingMigrations()];
const cluster = await throwAwayCluster();
try {
	const { problems: more, size } = await compareCatalogues(cluster);
	problems.push(...more);
	if (size === 0) problems.push('The schema describes nothing.');
	console.log(`${size} columns, constraints and indexes compared.`);
} finally {
	await cluster.remove();
}
for (const problem of problems) console.error(problem);
process.exit(problems.length > 0 ? 1 : 0);
