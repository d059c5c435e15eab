import { readFile } from 'node:fs/promises';
import { basename, join } from 'node:path';
import type { Worksheet } from '$lib/worksheets';
import { readTemplate as readFiles } from '$lib/worksheets/authoring';

/**
 * Reads `templates/<slug>/` into a compiled worksheet.
 * Errors: WorksheetSchemaProblem, naming file, line and field.
 */
export async function readTemplate(folder: string): Promise<Worksheet> {
	const [template, guide] = await Promise.all(
		['template.yaml', 'guide.md'].map((file) => readFile(join(folder, file), 'utf8'))
	);
	return readFiles(
		{ 'template.yaml': template ?? '', 'guide.md': guide ?? '' },
		`templates/${basename(folder)}`
	);
}
