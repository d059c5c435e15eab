import { createHash } from 'node:crypto';
import canonicalize from 'canonicalize';
import { and, desc, eq } from 'drizzle-orm';
import { v7 as uuidv7 } from 'uuid';
import type { Rubric, Worksheet } from '$lib/worksheets';
import { schema, type Transaction } from '../db';

const { parts, experiments, experimentVersions, rubrics, rubricVersions, criteria, levels } = schema;

/** Stores bytes once under their hash and returns the hash. */
export async function storePart(tx: Transaction, bytes: Uint8Array): Promise<Uint8Array> {
	const sha256 = createHash('sha256').update(bytes).digest();
	await tx.insert(parts).values({ sha256, bytes }).onConflictDoNothing();
	return sha256;
}

/** Canonical JSON (RFC 8785) as UTF-8. */
export function canonicalBytes(value: unknown): Uint8Array {
	const text = canonicalize(value);
	if (text === undefined) throw new TypeError('This value has no JSON form.');
	return Buffer.from(text, 'utf8');
}

/** The highest level earns the criterion's whole weight, the others their share; hundredths keep the sums exact. */
const pointsHundredths = (level: number, top: number, weight: number) =>
	Math.round((level / top) * weight * 100);

async function publishRubric(tx: Transaction, slug: string, rubric: Rubric): Promise<string> {
	await tx.insert(rubrics).values({ id: uuidv7(), slug, title: rubric.title }).onConflictDoNothing();
	const [parent] = await tx.select().from(rubrics).where(eq(rubrics.slug, slug)).for('update');
	if (!parent) throw new Error(`rubric ${slug} was just inserted and is not there`);
	const [newest] = await tx
		.select()
		.from(rubricVersions)
		.where(eq(rubricVersions.rubricId, parent.id))
		.orderBy(desc(rubricVersions.n))
		.limit(1);
	const versionId = uuidv7();
	await tx
		.insert(rubricVersions)
		.values({ id: versionId, rubricId: parent.id, n: (newest?.n ?? 0) + 1, title: rubric.title });
	for (const [position, criterion] of rubric.criteria.entries()) {
		const criterionId = uuidv7();
		const top = Math.max(1, ...criterion.levels.map(({ level }) => level));
		await tx.insert(criteria).values({
			id: criterionId,
			rubricVersionId: versionId,
			key: criterion.key,
			position,
			title: criterion.title
		});
		await tx.insert(levels).values(
			criterion.levels.map(({ level, text }) => ({
				criterionId,
				level,
				text,
				pointsHundredths: pointsHundredths(level, top, criterion.weight)
			}))
		);
	}
	return versionId;
}

export interface PublishedExperiment {
	experimentVersionId: string;
	rubricVersionId: string;
	n: number;
}

/**
 * Step: makes the worksheet the newest version of its experiment, with its rubric; an unchanged worksheet publishes
 * nothing and returns what is there.
 */
export async function publish(tx: Transaction, worksheet: Worksheet): Promise<PublishedExperiment> {
	const { slug, title } = worksheet;
	await tx.insert(experiments).values({ id: uuidv7(), slug, title }).onConflictDoNothing();
	const [experiment] = await tx.select().from(experiments).where(eq(experiments.slug, slug)).for('update');
	if (!experiment) throw new Error(`experiment ${slug} was just inserted and is not there`);
	const part = await storePart(tx, canonicalBytes(worksheet));
	const [newest] = await tx
		.select()
		.from(experimentVersions)
		.where(eq(experimentVersions.experimentId, experiment.id))
		.orderBy(desc(experimentVersions.n))
		.limit(1);
	const rubricSlug = `${slug}-report`;
	if (newest && Buffer.compare(Buffer.from(newest.part), Buffer.from(part)) === 0) {
		const [rubricVersion] = await tx
			.select({ id: rubricVersions.id })
			.from(rubricVersions)
			.innerJoin(rubrics, eq(rubrics.id, rubricVersions.rubricId))
			.where(and(eq(rubrics.slug, rubricSlug)))
			.orderBy(desc(rubricVersions.n))
			.limit(1);
		if (rubricVersion)
			return { experimentVersionId: newest.id, rubricVersionId: rubricVersion.id, n: newest.n };
	}
	const experimentVersionId = uuidv7();
	const n = (newest?.n ?? 0) + 1;
	await tx
		.insert(experimentVersions)
		.values({ id: experimentVersionId, experimentId: experiment.id, n, part });
	return {
		experimentVersionId,
		rubricVersionId: await publishRubric(tx, rubricSlug, worksheet.rubrics.report),
		n
	};
}
