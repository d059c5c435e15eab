import { sql } from 'drizzle-orm';
import type { MarkingState, RemarkAnchor, RemarkKind, RemarkShape, TotalShape } from '$lib/contracts/marking';
import { total } from '$lib/rubrics';
import type { Database, Transaction } from '../db';
import { notFound } from '../errors';
import * as experiments from '../experiments';
import type { StoredRubric } from '../experiments';
import { labelOf } from './label';

export interface LevelRow {
	criterion: string;
	level: number;
	points: number;
	at: string;
}

/** The levels in force of several markings: the newest event of each criterion, where it was not taken away. */
export async function levelsOfMany(
	db: Database | Transaction,
	markingIds: readonly string[]
): Promise<Map<string, LevelRow[]>> {
	const levels = new Map<string, LevelRow[]>(markingIds.map((id) => [id, []]));
	if (markingIds.length === 0) return levels;
	const rows = await db.execute<{
		marking_id: string;
		criterion_id: string;
		level: number;
		points: number;
		at: Date | string;
	}>(
		sql`select e.marking_id, e.criterion_id, e.level, e.points_hundredths as points, e.created_at as at from (
				select distinct on (marking_id, criterion_id) * from score_events
				where marking_id in ${[...markingIds]} order by marking_id, criterion_id, n desc
			) e join criteria c on c.id = e.criterion_id where e.level is not null order by c.position`
	);
	for (const row of rows) {
		levels.get(row.marking_id)?.push({
			criterion: row.criterion_id,
			level: row.level,
			points: row.points,
			at: new Date(row.at).toISOString()
		});
	}
	return levels;
}

export async function levelsOf(db: Database | Transaction, markingId: string): Promise<LevelRow[]> {
	return (await levelsOfMany(db, [markingId])).get(markingId) ?? [];
}

/** The remarks in force, oldest first: the newest revision of each, where it was not taken away. */
export async function remarksOf(db: Database | Transaction, markingId: string): Promise<RemarkShape[]> {
	const rows = await db.execute<{
		id: string;
		kind: RemarkKind;
		body: string;
		at: Date | string;
		section_position: number | null;
		selector: { selectors: RemarkAnchor['selectors']; links: string[] } | null;
		projection: number | null;
		attached: boolean | null;
	}>(
		sql`select k.id, v.kind, v.body, v.created_at as at, a.section_position, a.selector, a.projection, a.attached
			from remarks k join markings m on m.id = k.marking_id
			join lateral (select * from remark_revisions rv where rv.remark_id = k.id order by rv.n desc limit 1) v on true
			left join anchors a on a.remark_id = k.id and a.snapshot_id = m.snapshot_id
			where k.marking_id = ${markingId} and not v.deleted order by k.created_at, k.id`
	);
	return rows.map((row) => ({
		id: row.id,
		kind: row.kind,
		body: row.body,
		at: new Date(row.at).toISOString(),
		anchor:
			row.selector && row.section_position !== null && row.projection !== null
				? {
						section: row.section_position,
						selectors: row.selector.selectors,
						links: row.selector.links,
						projection: row.projection,
						attached: row.attached ?? false
					}
				: null
	}));
}

/** Rubric versions never change, so what was read once stays true. */
const rubrics = new Map<string, StoredRubric>();
const rubricsKept = 64;

export async function rubricOfMarking(
	db: Database | Transaction,
	rubricVersionId: string
): Promise<StoredRubric> {
	const kept = rubrics.get(rubricVersionId);
	if (kept) return kept;
	const rubric = await experiments.rubricOfVersion(db, rubricVersionId);
	if (rubrics.size >= rubricsKept) rubrics.delete(rubrics.keys().next().value ?? '');
	rubrics.set(rubricVersionId, rubric);
	return rubric;
}

const hundredths = (points: number) => Math.round(points * 100);

/** Sum of the levels in force against the most the rubric gives. */
export function totalOf(stored: StoredRubric, inForce: readonly LevelRow[]): TotalShape {
	const byId = new Map(inForce.map((row) => [row.criterion, row]));
	const sum = total(
		{
			key: stored.versionId,
			title: stored.title,
			criteria: stored.criteria.map(({ key, title, levels }) => ({
				key,
				title,
				asks: '',
				levels: levels.map(({ level, text, pointsHundredths }) => ({
					level,
					title: '',
					text,
					points: pointsHundredths / 100
				}))
			}))
		},
		Object.fromEntries(
			stored.criteria.map(({ id, key }) => {
				const row = byId.get(id);
				return [key, row ? { level: row.level, points: row.points / 100 } : null];
			})
		)
	);
	return {
		points: hundredths(sum.points),
		maximum: hundredths(sum.maximum),
		set: stored.criteria.length - sum.missing.length,
		of: stored.criteria.length
	};
}

/** The beginning of a hand-in's hash: tells two hand-ins apart and says nothing of whose or when. */
export const editionOf = (sha256: string): string => sha256.slice(0, 16);

/** A marking as its marker sees it. Names nothing of the author: neither the report's id nor the snapshot's, both of which hold a time. */
export async function stateOf(db: Database | Transaction, markingId: string): Promise<MarkingState> {
	const [row] = await db.execute<{
		revision: number;
		finished_at: Date | string | null;
		alias: string;
		rubric_version_id: string;
		manifest: string;
		returned: boolean | null;
	}>(
		sql`select m.revision, m.finished_at, m.rubric_version_id, r.alias, encode(s.manifest, 'hex') as manifest,
				(select rel.action from releases rel where rel.report_id = r.id order by rel.n desc limit 1) = 'return' as returned
			from markings m join snapshots s on s.id = m.snapshot_id join reports r on r.id = s.report_id where m.id = ${markingId}`
	);
	if (!row) throw notFound();
	const levels = await levelsOf(db, markingId);
	return {
		id: markingId,
		alias: row.alias,
		label: labelOf(row.alias),
		revision: row.revision,
		edition: editionOf(row.manifest),
		finishedAt: row.finished_at === null ? null : new Date(row.finished_at).toISOString(),
		returned: row.returned ?? false,
		levels,
		remarks: await remarksOf(db, markingId),
		total: totalOf(await rubricOfMarking(db, row.rubric_version_id), levels)
	};
}
