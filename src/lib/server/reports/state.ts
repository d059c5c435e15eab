import { sql, type SQL } from 'drizzle-orm';
import type { ReportState } from '$lib/contracts/reports';
import type { Database, Transaction } from '../db';

/** What a report's state is derived from; the state itself is stored nowhere. Says of the snapshot that counts. */
export interface StateFacts {
	handedIn: boolean;
	/** markings begun, common marking not among them */
	markings: number;
	/** of these, finished */
	finished: number;
	/** the last word on returning was to return */
	returned: boolean;
	/** criteria whose last word is a question to the instructor */
	openAppeals: number;
}

export function stateOf(facts: StateFacts): ReportState {
	if (facts.returned) return facts.openAppeals > 0 ? 'under appeal' : 'returned';
	if (!facts.handedIn) return 'draft';
	if (facts.markings === 0) return 'handed in';
	return facts.finished === facts.markings ? 'marked' : 'in marking';
}

/** To its author a report is with a marker until it comes back, however far the marking is. */
export function stateForAuthor(facts: StateFacts): ReportState {
	const state = stateOf(facts);
	return state === 'in marking' || state === 'marked' ? 'handed in' : state;
}

/** The facts of the report with this id (a value, or a column of an outer query) as one JSON object. */
export function stateFacts(report: string | SQL): SQL<StateFacts> {
	return sql<StateFacts>`(
		select jsonb_build_object(
			'handedIn', sr.counted_snapshot_id is not null,
			'markings', (select count(*) from markings sm where sm.snapshot_id = sr.counted_snapshot_id and sm.kind <> 'common'),
			'finished', (select count(*) from markings sm where sm.snapshot_id = sr.counted_snapshot_id and sm.kind <> 'common' and sm.finished_at is not null),
			'returned', coalesce((select sl.action = 'return' from releases sl where sl.report_id = sr.id order by sl.n desc limit 1), false),
			'openAppeals', (select count(*) from (
				select distinct on (sa.criterion_id) sa.action from appeals sa where sa.report_id = sr.id order by sa.criterion_id, sa.n desc
			) last where last.action = 'ask')
		) from reports sr where sr.id = ${report})`;
}

/** States of many reports by id. Says nothing of who may see them: ask for ids that came out of a permitted list. */
export async function statesOf(
	db: Database | Transaction,
	reportIds: readonly string[]
): Promise<Map<string, ReportState>> {
	const facts = await factsOf(db, reportIds);
	return new Map([...facts].map(([id, one]) => [id, stateOf(one)]));
}

export async function factsOf(
	db: Database | Transaction,
	reportIds: readonly string[]
): Promise<Map<string, StateFacts>> {
	if (reportIds.length === 0) return new Map();
	const ids = sql.join(
		reportIds.map((id) => sql`${id}::uuid`),
		sql`, `
	);
	const rows = await db.execute<{ id: string; facts: StateFacts }>(
		sql`select rr.id, ${stateFacts(sql`rr.id`)} as facts from reports rr where rr.id in (${ids})`
	);
	return new Map(rows.map(({ id, facts }) => [id, facts]));
}
