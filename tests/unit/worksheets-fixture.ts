import { readFileSync } from 'node:fs';
import { readTemplate, type TemplateFiles } from '$lib/worksheets/authoring';
import type { ReadingRow, Readings, Worksheet } from '$lib/worksheets';

/** A small worksheet of one table and one line. The experiment in `templates/` holds more and grows. */
const folder = new URL('data/water-line/', import.meta.url);

export const templateFiles: TemplateFiles = {
	'template.yaml': readFileSync(new URL('template.yaml', folder), 'utf8'),
	'guide.md': readFileSync(new URL('guide.md', folder), 'utf8')
};

/** As it is stored and sent: through JSON. */
export const water = JSON.parse(
	JSON.stringify(readTemplate(templateFiles, 'templates/vaporization-of-water'))
) as Worksheet;

export const exampleCsv = readFileSync(
	new URL('../../templates/vaporization-of-water/example/readings.csv', import.meta.url),
	'utf8'
);

/**
 * Ten equal steps of pressure: boiling temperatures (degC) from 400 to 760 torr by 40, rounded to 0.01 K, computed
 * from IAPWS-95 saturation pressures.
 */
export const boilingTemperatures = [
	'82.93',
	'85.35',
	'87.59',
	'89.68',
	'91.64',
	'93.48',
	'95.23',
	'96.89',
	'98.47',
	'99.97'
];
export const pressures = ['400', '440', '480', '520', '560', '600', '640', '680', '720', '760'];

export function row(id: string, t: string, p: string, more: Partial<ReadingRow> = {}): ReadingRow {
	return { id, cells: { t, p }, status: 'used', ...more };
}

export function readingsOf(
	rows: ReadingRow[],
	parameters: Record<string, string> = { p_b: '756.2' }
): Readings {
	return { parameters, tables: { readings: rows } };
}

export function tenSteps(): ReadingRow[] {
	return boilingTemperatures.map((t, i) => row(`row-${i + 1}`, t, pressures[i] ?? ''));
}
