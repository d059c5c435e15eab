import { asc, eq } from 'drizzle-orm';
import { fromStored, type StoredWorksheet, type Worksheet } from '$lib/worksheets';
import { schema, type Database, type Transaction } from '../db';
import { notFound } from '../errors';

const { assignments, criteria, experimentVersions, levels, parts, rubricVersions } = schema;

/** Compiled worksheets never change under their version's id, so a small cache cannot be stale. */
const cache = new Map<string, Worksheet>();
const cacheLimit = 32;

async function worksheetOfVersion(db: Database | Transaction, versionId: string): Promise<Worksheet> {
	const cached = cache.get(versionId);
	if (cached) return cached;
	const [row] = await db
		.select({ bytes: parts.bytes })
		.from(experimentVersions)
		.innerJoin(parts, eq(parts.sha256, experimentVersions.part))
		.where(eq(experimentVersions.id, versionId));
	if (!row?.bytes) throw notFound();
	const worksheet = fromStored(JSON.parse(Buffer.from(row.bytes).toString('utf8')) as StoredWorksheet);
	if (cache.size >= cacheLimit) cache.delete(cache.keys().next().value ?? '');
	cache.set(versionId, worksheet);
	return worksheet;
}

/** The worksheet of the experiment version an assignment uses. Errors: Refusal 'not-found'. */
export async function worksheetOf(db: Database | Transaction, assignmentId: string): Promise<Worksheet> {
	const [row] = await db
		.select({ versionId: assignments.experimentVersionId })
		.from(assignments)
		.where(eq(assignments.id, assignmentId));
	if (!row) throw notFound();
	return worksheetOfVersion(db, row.versionId);
}

export interface StoredRubric {
	versionId: string;
	title: string;
	/** in order */
	criteria: StoredCriterion[];
}
export interface StoredCriterion {
	id: string;
	key: string;
	title: string;
	/** lowest first; points in hundredths */
	levels: { level: number; text: string; pointsHundredths: number }[];
}

export async function rubricOfVersion(db: Database | Transaction, versionId: string): Promise<StoredRubric> {
	const [version] = await db.select().from(rubricVersions).where(eq(rubricVersions.id, versionId));
	if (!version) throw notFound();
	const rows = await db
		.select({ criterion: criteria, level: levels })
		.from(criteria)
		.innerJoin(levels, eq(levels.criterionId, criteria.id))
		.where(eq(criteria.rubricVersionId, versionId))
		.orderBy(asc(criteria.position), asc(levels.level));
	const byId = new Map<string, StoredCriterion>();
	for (const { criterion, level } of rows) {
		const { id, key, title } = criterion;
		const entry = byId.get(id) ?? { id, key, title, levels: [] };
		entry.levels.push({ level: level.level, text: level.text, pointsHundredths: level.pointsHundredths });
		byId.set(id, entry);
	}
	return { versionId, title: version.title, criteria: [...byId.values()] };
}

/** The rubric an assignment is marked with. Errors: Refusal 'not-found'. */
export async function rubricOf(db: Database | Transaction, assignmentId: string): Promise<StoredRubric> {
	const [row] = await db
		.select({ versionId: assignments.rubricVersionId })
		.from(assignments)
		.where(eq(assignments.id, assignmentId));
	if (!row) throw notFound();
	return rubricOfVersion(db, row.versionId);
}
