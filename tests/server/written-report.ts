import { seedReadings, seedSection } from '../../src/lib/collab';
import type { Report } from '../../src/lib/contracts/reports';
import { shownResults, type ShownResult } from '../../src/lib/reports';
import { database } from '../../src/lib/server/db';
import type { Viewer } from '../../src/lib/server/auth';
import * as readings from '../../src/lib/server/readings';
import * as reports from '../../src/lib/server/reports';
import { tenReadings } from '../golden/readings';
import { engineVersion, evaluate, type Readings, type Worksheet } from '../../src/lib/worksheets';

// A report as two students would have it on the evening before it is due, made without a browser.

export { tenReadings };

export const writtenSections: Record<string, string> = {
	abstract: 'Water was boiled under ten pressures. The enthalpy is :value[H_vap] at :value[T_h].',
	introduction: 'The slope of $\\ln p$ against $1/T$ tells the enthalpy of vaporization.',
	method: 'Air was let in until the gauge was steady; the barometer stood at 757.6 torr.',
	results: 'The line is shown in :figure[line].\n\n::figure[line]\n\n::workings[H_vap]',
	discussion: 'The difference to the literature is small.\n\n::comparison[H_vap]'
};

export interface WrittenReport {
	report: Report;
	worksheet: Worksheet;
	results: Record<string, ShownResult>;
	engine: string;
}

/** Puts a first text into a section that has none. */
export const write = (document: string, text: string): Promise<boolean> =>
	database().transaction((tx) => readings.seedDocument(tx, document, seedSection(text)));

/** What a page that shows these readings hands in. */
export function shownOf(worksheet: Worksheet, values: Readings): Pick<WrittenReport, 'results' | 'engine'> {
	return { results: shownResults(evaluate(worksheet, values)), engine: engineVersion };
}

/** Opens the person's report, and fills what is empty. */
export async function writeReport(
	viewer: Viewer,
	workId: string,
	texts: Record<string, string> = writtenSections,
	values: Readings = tenReadings
): Promise<WrittenReport> {
	const { report, worksheet } = await reports.openSheet(viewer, workId);
	for (const section of report.sections) {
		const text = texts[section.key];
		if (text !== undefined) await write(section.document, text);
	}
	await database().transaction((tx) =>
		readings.seedDocument(tx, report.readings.document, seedReadings(values))
	);
	return { report, worksheet, ...shownOf(worksheet, values) };
}
