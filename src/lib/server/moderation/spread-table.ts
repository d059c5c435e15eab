import type { Viewer } from '../auth';
import * as marking from '../marking';
import { csvText } from './csv';
import { markedOf, type SpreadInput } from './read-spread';

export interface NamedCsv {
	fileName: string;
	text: string;
}

const fileName = (title: string) =>
	`spread-${title
		.toLowerCase()
		.replaceAll(/[^a-z0-9]+/g, '-')
		.replaceAll(/^-|-$/g, '')}.csv`;

/** One line for each finished marking: who, by whom, points of each criterion, total, and what the late rule leaves. */
export async function spreadTable(viewer: Viewer, input: SpreadInput): Promise<NamedCsv> {
	const { assignment, finished, rubric } = await markedOf(viewer, input);
	const criteria = rubric?.criteria ?? [];
	const head = [
		'Report',
		'Lab section',
		'Team',
		'Author',
		'Grader',
		...criteria.map(({ title }) => title),
		'Total',
		'Of',
		'Late deduction',
		'After deduction',
		'Returned'
	];
	const lines = finished.map((row) => {
		const points = new Map(row.levels.map((level) => [level.criterion, level.points / 100]));
		return [
			marking.labelOf(row.alias),
			row.labSection,
			row.team,
			row.author,
			row.marker,
			...criteria.map(({ id }) => points.get(id) ?? null),
			row.total.points / 100,
			row.total.maximum / 100,
			row.late.deduction / 100,
			row.late.points / 100,
			row.returnedAt ? 'yes' : 'no'
		];
	});
	return { fileName: fileName(assignment?.title ?? 'course'), text: csvText([head, ...lines]) };
}
