import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Worksheet } from '$lib/worksheets';
import { readWorksheet } from '$lib/worksheets/authoring';

/**
 * Reads `templates/<slug>/` into a compiled worksheet.
 * Errors: WorksheetSchemaProblem, naming file, line and field.
 */
export async function readTemplate(folder: string): Promise<Worksheet> {
	const file = join(folder, 'template.yaml');
	return readWorksheet(await readFile(file, 'utf8'), file);
}
