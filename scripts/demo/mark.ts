import { v7 as uuidv7 } from 'uuid';
import { describeSelection, projectSection } from '../../src/lib/reports';
import type { Act, Viewer } from '../../src/lib/server/auth';
import { database } from '../../src/lib/server/db';
import * as experiments from '../../src/lib/server/experiments';
import * as marking from '../../src/lib/server/marking';
import * as reports from '../../src/lib/server/reports';
import { severity } from './people';
import type { SeededRandom } from './random';
import { remarks } from './texts';

/** Noise of one judgement, in levels. */
const judgement = 0.35;

export interface ToMark {
	alias: string;
	snapshotId: string;
	assignmentId: string;
	/** how good the report truly is, in levels */
	quality: number;
}

/** A grader with a known severity marks one report, through the same verbs as a person. `upTo` criteria, all when absent. */
export async function markReport(
	random: SeededRandom,
	grader: Viewer,
	report: ToMark,
	upTo?: number
): Promise<void> {
	const harshness = severity[grader.name] ?? 0;
	const acting = (revision: number): Act => ({ viewer: grader, revision });
	let state = await marking.openMarking({ viewer: grader }, { alias: report.alias });
	const rubric = await experiments.rubricOf(database(), report.assignmentId);
	for (const criterion of rubric.criteria.slice(0, upTo)) {
		const top = criterion.levels.at(-1)?.level ?? 0;
		const level = Math.min(
			top,
			Math.max(0, Math.round(report.quality - harshness + judgement * random.normal()))
		);
		state = await marking.setLevel(acting(state.revision), {
			marking: state.id,
			criterion: criterion.id,
			level,
			reason: ''
		});
	}
	const snapshot = await reports.readSnapshot(database(), report.snapshotId);
	for (const section of snapshot.sections) {
		const projection = projectSection(section.text, snapshot.evaluation);
		for (const { quote, kind, body } of remarks) {
			const at = projection.text.indexOf(quote);
			if (at < 0 || random.uniform() < 0.25) continue;
			const start = [...projection.text.slice(0, at)].length;
			const anchor = describeSelection(projection, start, start + [...quote].length);
			if (!anchor) continue;
			state = await marking.addRemark(acting(state.revision), {
				marking: state.id,
				remark: uuidv7(),
				kind,
				body,
				anchor: { section: section.position, ...anchor }
			});
		}
	}
	if (upTo === undefined) await marking.finishMarking(acting(state.revision), { marking: state.id });
}
